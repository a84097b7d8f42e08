//! Matrices with known eigenvalues: from closed forms, and from calculations in more digits.

use super::eigenvalues;
use crate::arithmetic::elementary::{cos, sin};
use crate::arithmetic::ratio;
use num_rational::BigRational;
use num_traits::{One, Zero};

fn check(matrix: &[f64], n: usize, tolerance: f64, expect: &[(f64, f64)]) {
    let found = eigenvalues(matrix, n).unwrap();
    assert_eq!(found.len(), expect.len());
    for (ours, expect) in found.iter().zip(expect) {
        let error = (ours.0 - expect.0).abs() + (ours.1 - expect.1).abs();
        assert!(error <= tolerance, "{found:?}, at {expect:?}: {error:e}");
    }
}

fn real(values: &[f64]) -> Vec<(f64, f64)> {
    values.iter().map(|&value| (value, 0.0)).collect()
}

/// First row `-c_{n-1} ... -c_0` for the polynomial `x^n + c_{n-1} x^{n-1} + ... + c_0`, ones below the diagonal.
fn companion(c: &[f64]) -> Vec<f64> {
    let n = c.len();
    let mut matrix = vec![0.0; n * n];
    for (j, c) in c.iter().rev().enumerate() {
        matrix[j] = -c;
    }
    for i in 1..n {
        matrix[i * n + i - 1] = 1.0;
    }
    matrix
}

/// Whole numbers from -9 to 9 by a linear congruence.
fn whole_numbers(seed: u64, count: usize) -> Vec<f64> {
    let mut state = seed;
    let mut draw = || {
        state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
        f64::from(u8::try_from((state >> 33) % 19).unwrap()) - 9.0
    };
    (0..count).map(|_| draw()).collect()
}

fn determinant(matrix: &[f64], n: usize) -> f64 {
    let mut rows: Vec<Vec<BigRational>> =
        matrix.chunks(n).map(|row| row.iter().map(|&x| ratio::exact(x).unwrap()).collect()).collect();
    let mut product = BigRational::one();
    for k in 0..n {
        let Some(pivot) = (k..n).find(|&i| !rows[i][k].is_zero()) else { return 0.0 };
        if pivot != k {
            rows.swap(pivot, k);
            product = -product;
        }
        product *= rows[k][k].clone();
        for i in k + 1..n {
            let factor = &rows[i][k] / &rows[k][k];
            let above = rows[k].clone();
            rows[i].iter_mut().zip(&above).for_each(|(x, above)| *x -= &factor * above);
        }
    }
    ratio::nearest(&product)
}

#[test]
fn companion_matrices_give_their_roots() {
    // (x - 1)(x - 2)(x - 3)(x - 4) = x^4 - 10 x^3 + 35 x^2 - 50 x + 24.
    check(&companion(&[24.0, -50.0, 35.0, -10.0]), 4, 1e-12, &real(&[1.0, 2.0, 3.0, 4.0]));
    // (x^2 + 1)(x^2 - 2 x + 5)(x + 3) = x^5 + x^4 + 16 x^2 - x + 15.
    check(
        &companion(&[15.0, -1.0, 16.0, 0.0, 1.0]),
        5,
        1e-13,
        &[(-3.0, 0.0), (0.0, -1.0), (0.0, 1.0), (1.0, -2.0), (1.0, 2.0)],
    );
    // (x - 1)^3: a triple root is known to a third of the digits, here (2^-52)^(1/3) = 6e-6.
    let triple = eigenvalues(&companion(&[-1.0, 3.0, -3.0]), 3).unwrap();
    assert!(triple.iter().all(|(re, im)| (re - 1.0).abs() + im.abs() < 3e-5), "{triple:?}");
}

#[test]
fn a_cyclic_permutation_gives_the_roots_of_unity() {
    // Double shifts of 0 leave these matrices as they are: only the other shift gets on.
    for n in 3..12 {
        let mut c = vec![0.0; n];
        c[0] = -1.0;
        let mut expect: Vec<(f64, f64)> = (0..n)
            .map(|k| std::f64::consts::TAU * (k as f64) / (n as f64))
            .map(|angle| (cos(angle), sin(angle)))
            .collect();
        let found = eigenvalues(&companion(&c), n).unwrap();
        for (re, im) in found {
            let distance = |point: &(f64, f64)| (point.0 - re).abs() + (point.1 - im).abs();
            let nearest = (0..expect.len())
                .min_by(|&a, &b| distance(&expect[a]).total_cmp(&distance(&expect[b])))
                .unwrap();
            assert!(distance(&expect[nearest]) < 1e-14, "n = {n}: {re} {im}");
            expect.remove(nearest);
        }
    }
}

#[test]
fn hilbert_and_frank_matrices_give_the_reference_values() {
    // Eigenvalues from a separate calculation in 40 digits.
    let hilbert = |n: usize| -> Vec<f64> {
        (0..n * n).map(|place| 1.0 / ((place / n + place % n + 1) as f64)).collect()
    };
    let five = [
        3.2879287721718629571e-6,
        0.00030589804015119172688,
        0.011407491623419806559,
        0.20853421861101333591,
        1.5670506910982307955,
    ];
    check(&hilbert(5), 5, 1e-15, &real(&five));
    let eight = [
        1.1115389663724424271e-10,
        1.7988737458175766773e-8,
        1.2943320928718114803e-6,
        0.000054369433697499423624,
        0.0014676881177418673116,
        0.026212843578119047797,
        0.29812521131693070618,
        1.6959389969219494521,
    ];
    check(&hilbert(8), 8, 1e-15, &real(&eight));
    // Frank (1958), J. Soc. Indust. Appl. Math. 6, 378-392: n - max(i, j) + 1 down to the subdiagonal.
    let frank: Vec<f64> = (0..36)
        .map(|place| (place / 6, place % 6))
        .map(|(i, j)| if j + 1 >= i { f64::from(6 - i.max(j)) } else { 0.0 })
        .collect();
    let six = [
        0.077079560741671116266,
        0.18576231491033018366,
        0.54480378112257874436,
        1.8355232372643975214,
        5.3832231821761729987,
        12.973607923784849436,
    ];
    check(&frank, 6, 1e-12, &real(&six));
}

#[test]
fn rotations_give_pairs_on_the_unit_circle() {
    // Two turns by 3-4-5 and 5-12-13 triangles, coupled one way: a block triangular matrix.
    let matrix = [
        0.6,
        -0.8,
        7.0,
        1.0, //
        0.8,
        0.6,
        -2.0,
        3.0, //
        0.0,
        0.0,
        -5.0 / 13.0,
        -12.0 / 13.0, //
        0.0,
        0.0,
        12.0 / 13.0,
        -5.0 / 13.0,
    ];
    let (a, b) = (5.0 / 13.0, 12.0 / 13.0);
    check(&matrix, 4, 1e-14, &[(-a, -b), (-a, b), (0.6, -0.8), (0.6, 0.8)]);
    check(&[0.0, -3.0, 3.0, 0.0], 2, 0.0, &[(0.0, -3.0), (0.0, 3.0)]);
}

#[test]
fn second_differences_give_the_closed_form() {
    // tridiagonal(1, -2, 1) has -4 sin^2(k pi / (2 (n + 1))): Golub & Van Loan (4th ed. 2013), sect. 4.8.
    for n in [1, 2, 3, 10, 50] {
        let mut matrix = vec![0.0; n * n];
        for i in 0..n {
            matrix[i * n + i] = -2.0;
            if i + 1 < n {
                matrix[i * n + i + 1] = 1.0;
                matrix[(i + 1) * n + i] = 1.0;
            }
        }
        let expect: Vec<(f64, f64)> = (1..=n)
            .rev()
            .map(|k| sin((k as f64) * std::f64::consts::PI / (2.0 * ((n + 1) as f64))))
            .map(|s| (-4.0 * s * s, 0.0))
            .collect();
        check(&matrix, n, 1e-13, &expect);
    }
}

#[test]
fn trace_and_determinant_of_random_matrices_come_back() {
    for n in 1..=12 {
        for seed in 0..20 {
            let matrix = whole_numbers(seed * 100 + n as u64, n * n);
            let found = eigenvalues(&matrix, n).unwrap();
            let trace: f64 = (0..n).map(|i| matrix[i * n + i]).sum();
            let sum = found.iter().fold((0.0, 0.0), |sum, value| (sum.0 + value.0, sum.1 + value.1));
            assert!((sum.0 - trace).abs() < 1e-12 && sum.1.abs() < 1e-12, "n = {n}, seed {seed}");
            let product =
                found.iter().fold((1.0, 0.0), |(a, b), (re, im)| (a * re - b * im, a * im + b * re));
            // All eigenvalues lie below 9 n; each is known to about 1e-13 of that, times its condition.
            let size: f64 = found.iter().map(|(re, im)| 1.0 + re.abs() + im.abs()).product();
            let error = (product.0 - determinant(&matrix, n)).abs() + product.1.abs();
            assert!(error < 1e-12 * size, "n = {n}, seed {seed}: {error:e} of {size:e}");
        }
    }
}

#[test]
fn balancing_keeps_the_small_eigenvalues_of_a_badly_scaled_matrix() {
    // D^-1 A D with D = diag(1, 2^20, 2^40) and the second differences A of three points.
    let far = f64::from(1 << 20);
    let matrix = [-2.0, far, 0.0, 1.0 / far, -2.0, far, 0.0, 1.0 / far, -2.0];
    let root = 2.0_f64.sqrt();
    check(&matrix, 3, 1e-14, &real(&[-2.0 - root, -2.0, -2.0 + root]));
}

#[test]
fn a_power_of_two_scales_the_result_exactly() {
    let matrix = whole_numbers(5, 36);
    let plain = eigenvalues(&matrix, 6).unwrap();
    for exponent in [-1000, -300, 300, 1000] {
        let unit = f64::from_bits(u64::try_from(1023 + exponent).unwrap() << 52);
        let scaled: Vec<f64> = matrix.iter().map(|x| x * unit).collect();
        let expect: Vec<_> = plain.iter().map(|(re, im)| (re * unit, im * unit)).collect();
        assert_eq!(eigenvalues(&scaled, 6), Some(expect));
    }
}

#[test]
fn what_is_no_finite_square_matrix_has_none() {
    assert_eq!(eigenvalues(&[1.0, 2.0, 3.0], 2), None);
    assert_eq!(eigenvalues(&[1.0, f64::NAN, 0.0, 1.0], 2), None);
    assert_eq!(eigenvalues(&[f64::INFINITY], 1), None);
    assert_eq!(eigenvalues(&[], usize::MAX), None);
    assert_eq!(eigenvalues(&[], 0), Some(vec![]));
    assert_eq!(eigenvalues(&[0.0; 4], 2), Some(vec![(0.0, 0.0); 2]));
    assert_eq!(eigenvalues(&[-0.0], 1).unwrap()[0].0.to_bits(), 0);
}
