//! All eigenvalues of a real square matrix: balancing, reduction to Hessenberg form, and the double-shift QR
//! iteration. Only + - * / and square roots, one after the other as written: the same bits on every machine.
//!
//! Source: Wilkinson & Reinsch, Handbook for Automatic Computation II (1971), contributions II/11 (balancing),
//! II/13 (elimination to Hessenberg form), II/14 (QR); Golub & Van Loan, Matrix Computations (4th ed. 2013), ch. 7.

/// Iterations for one eigenvalue before the search is given up; 10 and 20 use another shift.
const MOST_ITERATIONS: u32 = 60;
/// Sweeps of balancing: each makes the norm smaller by a twentieth at least, so this many are never needed.
const MOST_SWEEPS: u32 = 2000;

/// The `n` eigenvalues as real and imaginary part, in rising order of the real part, then of the imaginary part.
///
/// # Shapes
/// `matrix`: `n * n` numbers, row by row.
/// # Accuracy
/// Those of a matrix that differs from the given one by a few roundings of its norm after balancing. A multiple
/// eigenvalue of multiplicity `m` is then known to the `m`-th part of the digits only.
/// # Errors
/// `None` where the shape is wrong, a number is not finite, or the iteration does not converge.
pub fn eigenvalues(matrix: &[f64], n: usize) -> Option<Vec<(f64, f64)>> {
    if n.checked_mul(n) != Some(matrix.len()) || !matrix.iter().all(|x| x.is_finite()) {
        return None;
    }
    let largest = matrix.iter().fold(0.0, |largest, x| if x.abs() > largest { x.abs() } else { largest });
    if largest == 0.0 {
        return Some(vec![(0.0, 0.0); n]);
    }
    // A power of two, so that dividing by it changes no bit, and squares neither overflow nor vanish.
    let unit = f64::from_bits(largest.to_bits() & (0x7ff << 52));
    let unit = if unit == 0.0 { f64::MIN_POSITIVE } else { unit };
    let mut square = Square { n, entries: matrix.iter().map(|x| x / unit).collect() };
    square.balance();
    square.reduce_to_hessenberg();
    let mut found = square.iterate()?;
    for value in &mut found {
        // Adding zero turns -0 into 0.
        *value = (value.0 * unit + 0.0, value.1 * unit + 0.0);
    }
    if !found.iter().all(|(re, im)| re.is_finite() && im.is_finite()) {
        return None;
    }
    found.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.total_cmp(&b.1)));
    Some(found)
}

struct Square {
    n: usize,
    entries: Vec<f64>,
}

impl std::ops::Index<(usize, usize)> for Square {
    type Output = f64;
    fn index(&self, (i, j): (usize, usize)) -> &f64 {
        &self.entries[i * self.n + j]
    }
}

impl std::ops::IndexMut<(usize, usize)> for Square {
    fn index_mut(&mut self, (i, j): (usize, usize)) -> &mut f64 {
        &mut self.entries[i * self.n + j]
    }
}

impl Square {
    /// Scales rows and columns by powers of two until those of the same number have norms of the same size.
    fn balance(&mut self) {
        for _ in 0..MOST_SWEEPS {
            let mut changed = false;
            for i in 0..self.n {
                let others = (0..self.n).filter(|&j| j != i);
                let (column, row) = others.fold((0.0, 0.0), |(column, row), j| {
                    (column + self[(j, i)].abs(), row + self[(i, j)].abs())
                });
                if column == 0.0 || row == 0.0 {
                    continue;
                }
                let (mut factor, mut scaled) = (1.0, column);
                while scaled < row / 2.0 {
                    factor *= 2.0;
                    scaled *= 4.0;
                }
                while scaled >= row * 2.0 {
                    factor /= 2.0;
                    scaled /= 4.0;
                }
                if (scaled + row) / factor < 0.95 * (column + row) {
                    changed = true;
                    for j in 0..self.n {
                        self[(i, j)] /= factor;
                    }
                    for j in 0..self.n {
                        self[(j, i)] *= factor;
                    }
                }
            }
            if !changed {
                return;
            }
        }
    }

    /// Clears what lies below the subdiagonal by elimination with the largest pivot of each column.
    fn reduce_to_hessenberg(&mut self) {
        let n = self.n;
        for m in 1..n.saturating_sub(1) {
            let mut pivot = m;
            for i in m + 1..n {
                if self[(i, m - 1)].abs() > self[(pivot, m - 1)].abs() {
                    pivot = i;
                }
            }
            if self[(pivot, m - 1)] == 0.0 {
                continue;
            }
            if pivot != m {
                for j in 0..n {
                    self.entries.swap(pivot * n + j, m * n + j);
                }
                for i in 0..n {
                    self.entries.swap(i * n + pivot, i * n + m);
                }
            }
            for i in m + 1..n {
                let factor = self[(i, m - 1)] / self[(m, m - 1)];
                if factor == 0.0 {
                    continue;
                }
                for j in m..n {
                    self[(i, j)] -= factor * self[(m, j)];
                }
                self[(i, m - 1)] = 0.0;
                for k in 0..n {
                    self[(k, m)] += factor * self[(k, i)];
                }
            }
        }
    }

    /// Splits off one or two eigenvalues at a time from the lower end.
    fn iterate(&mut self) -> Option<Vec<(f64, f64)>> {
        let norm: f64 = self.entries.iter().map(|x| x.abs()).sum();
        let mut found = Vec::with_capacity(self.n);
        let mut end = self.n;
        let mut iterations = 0;
        while end > 0 {
            let begin = self.split(end, norm);
            match end - begin {
                1 => {
                    found.push((self[(begin, begin)], 0.0));
                    end -= 1;
                    iterations = 0;
                }
                2 => {
                    found.extend(self.pair(begin));
                    end -= 2;
                    iterations = 0;
                }
                _ => {
                    iterations += 1;
                    if iterations > MOST_ITERATIONS {
                        return None;
                    }
                    self.sweep(begin, end, iterations % 10 == 0);
                }
            }
        }
        Some(found)
    }

    /// Where the last block that does not fall apart begins: above it the subdiagonal is negligible.
    fn split(&mut self, end: usize, norm: f64) -> usize {
        let mut begin = end - 1;
        while begin > 0 {
            let size = self[(begin - 1, begin - 1)].abs() + self[(begin, begin)].abs();
            let size = if size == 0.0 { norm } else { size };
            if self[(begin, begin - 1)].abs() <= f64::EPSILON * size {
                self[(begin, begin - 1)] = 0.0;
                break;
            }
            begin -= 1;
        }
        begin
    }

    /// The eigenvalues of the block of two rows at `i`.
    fn pair(&self, i: usize) -> [(f64, f64); 2] {
        let (a, d) = (self[(i, i)], self[(i + 1, i + 1)]);
        let off = self[(i, i + 1)] * self[(i + 1, i)];
        let half = 0.5 * (a - d);
        let discriminant = half * half + off;
        let root = discriminant.abs().sqrt();
        if discriminant < 0.0 {
            return [(d + half, root), (d + half, -root)];
        }
        // The sum of two numbers of the same sign loses no digit; the other eigenvalue follows from the product.
        let sum = if half < 0.0 { half - root } else { half + root };
        [(d + sum, 0.0), (if sum == 0.0 { d } else { d - off / sum }, 0.0)]
    }

    /// One double-shift step on the block `begin..end` of at least three rows.
    fn sweep(&mut self, begin: usize, end: usize, other_shift: bool) {
        let last = end - 1;
        // Shifts are the eigenvalues of a block of two rows with the diagonal `x, y` and the product `w` beside it.
        let (mut x, mut y) = (self[(last, last)], self[(last - 1, last - 1)]);
        let mut w = self[(last, last - 1)] * self[(last - 1, last)];
        if other_shift {
            let s = self[(last, last - 1)].abs() + self[(last - 1, last - 2)].abs();
            x += 0.75 * s;
            y = x;
            w = -0.4375 * s * s;
        }
        let (start, mut column) = self.first_column(begin, last, (x, y, w));
        for i in start + 2..end {
            self[(i, i - 2)] = 0.0;
            if i > start + 2 {
                self[(i, i - 3)] = 0.0;
            }
        }
        for k in start..last {
            let three = k + 2 < end;
            let mut scale = 1.0;
            if k > start {
                column =
                    [self[(k, k - 1)], self[(k + 1, k - 1)], if three { self[(k + 2, k - 1)] } else { 0.0 }];
                scale = column[0].abs() + column[1].abs() + column[2].abs();
                if scale == 0.0 {
                    continue;
                }
                column = column.map(|entry| entry / scale);
            }
            let [p, q, r] = column;
            let length = (p * p + q * q + r * r).sqrt();
            let s = if p < 0.0 { -length } else { length };
            if k > start {
                self[(k, k - 1)] = -s * scale;
            } else if start > begin {
                self[(k, k - 1)] = -self[(k, k - 1)];
            }
            // The reflection is I - u v^T with u = (x, y, z) and v = (1, q, r).
            let p = p + s;
            let u = [p / s, column[1] / s, column[2] / s];
            self.reflect((begin, k, end), u, [q / p, r / p], three);
        }
    }

    /// Where the step may begin, because the entry above is small enough, and the first column of the shifted
    /// product there, scaled.
    fn first_column(&self, begin: usize, last: usize, (x, y, w): (f64, f64, f64)) -> (usize, [f64; 3]) {
        let mut m = last - 2;
        loop {
            let own = self[(m, m)];
            let (to_x, to_y) = (x - own, y - own);
            let p = (to_x * to_y - w) / self[(m + 1, m)] + self[(m, m + 1)];
            let q = self[(m + 1, m + 1)] - own - to_x - to_y;
            let r = self[(m + 2, m + 1)];
            let scale = p.abs() + q.abs() + r.abs();
            let [p, q, r] = [p / scale, q / scale, r / scale];
            if m == begin {
                return (m, [p, q, r]);
            }
            let left = self[(m, m - 1)].abs() * (q.abs() + r.abs());
            let around = self[(m - 1, m - 1)].abs() + own.abs() + self[(m + 1, m + 1)].abs();
            if left <= f64::EPSILON * p.abs() * around {
                return (m, [p, q, r]);
            }
            m -= 1;
        }
    }

    /// Applies a reflection of the rows and columns `k`, `k + 1` and, for `three`, `k + 2` within a block.
    fn reflect(
        &mut self,
        (begin, k, end): (usize, usize, usize),
        [x, y, z]: [f64; 3],
        [q, r]: [f64; 2],
        three: bool,
    ) {
        for j in k..end {
            let mut sum = self[(k, j)] + q * self[(k + 1, j)];
            if three {
                sum += r * self[(k + 2, j)];
                self[(k + 2, j)] -= sum * z;
            }
            self[(k + 1, j)] -= sum * y;
            self[(k, j)] -= sum * x;
        }
        for i in begin..end.min(k + 4) {
            let mut sum = x * self[(i, k)] + y * self[(i, k + 1)];
            if three {
                sum += z * self[(i, k + 2)];
                self[(i, k + 2)] -= sum * r;
            }
            self[(i, k + 1)] -= sum * q;
            self[(i, k)] -= sum;
        }
    }
}

#[cfg(test)]
mod tests;
