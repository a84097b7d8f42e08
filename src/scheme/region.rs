//! The outline of a scheme's region of stability: closed polylines on which `|R(z)| = 1`, for a drawing.
//!
//! Marching squares on a grid, each crossing then found on its grid line by bisection. Features narrower than a
//! cell may be missed; everything else, islands too, is closed and in a stated order.

use std::collections::BTreeMap;

use super::stability::Stability;
use crate::arithmetic::{larger, smaller};

/// A point of the plane of `z = h lambda`: real and imaginary part.
type Point = (f64, f64);

/// Cells from the middle of the plane to the radius beyond which nothing is stable, for the first look.
const COARSE: u32 = 48;
/// Halvings of a grid line: more than the bits of a number.
const HALVINGS: u32 = 60;

impl Stability {
    /// Closed loops around the stable points, which lie on their left; the first point stands again at the end.
    ///
    /// `n`: cells across the longer side of the region, at least 8. No loop where `R` is constant.
    pub fn boundary(&self, n: u32) -> Vec<Vec<Point>> {
        let Some(radius) = self.radius() else { return Vec::new() };
        let coarse = Grid::new(self, radius / f64::from(COARSE), |cell| Frame::around(radius, cell));
        let extent = coarse.extent();
        let (width, height) = (extent.1.0 - extent.0.0, extent.1.1 - extent.0.1);
        let cell = larger(width, height) / f64::from(n.max(8));
        let mut margin = 2.0 * coarse.cell;
        loop {
            let grid = Grid::new(self, cell, |cell| Frame::with_margin(extent, margin, cell));
            // Ends: beyond the radius no node is stable.
            if !grid.touches_its_edge() {
                return grid.loops(self);
            }
            margin *= 2.0;
        }
    }
}

/// Grid lines by number: column `i` stands at `(i + 1/2)` cells. So no node lies on an axis, where `|R|` may be 1
/// over a length, and none at 0, where it always is.
#[derive(Clone, Copy, Debug)]
struct Frame {
    low: (i64, i64),
    high: (i64, i64),
}

impl Frame {
    fn around(radius: f64, cell: f64) -> Self {
        Self::with_margin(((0.0, 0.0), (0.0, 0.0)), radius, cell)
    }

    fn with_margin((low, high): (Point, Point), margin: f64, cell: f64) -> Self {
        let line = |x: f64| whole((x / cell).floor());
        Self {
            low: (line(low.0 - margin) - 1, line(low.1 - margin) - 1),
            high: (line(high.0 + margin) + 1, line(high.1 + margin) + 1),
        }
    }
}

#[expect(clippy::cast_possible_truncation, reason = "a count of cells: a few thousand at most")]
fn whole(x: f64) -> i64 {
    x as i64
}

/// Which nodes of a grid are stable.
struct Grid {
    cell: f64,
    frame: Frame,
    /// By column, then row.
    stable: Vec<bool>,
}

type Node = (i64, i64);

impl Grid {
    fn new(stability: &Stability, cell: f64, frame: impl Fn(f64) -> Frame) -> Self {
        let frame = frame(cell);
        let mut grid = Self { cell, frame, stable: Vec::new() };
        grid.stable = grid.nodes().map(|node| is_stable(stability, grid.place(node))).collect();
        grid
    }

    fn nodes(&self) -> impl Iterator<Item = Node> + use<> {
        let Frame { low, high } = self.frame;
        (low.0..=high.0).flat_map(move |i| (low.1..=high.1).map(move |j| (i, j)))
    }

    fn stable_nodes(&self) -> impl Iterator<Item = Node> {
        self.nodes().zip(&self.stable).filter(|(_, stable)| **stable).map(|(node, _)| node)
    }

    /// Whether a node of the grid is stable.
    fn holds(&self, (i, j): Node) -> bool {
        let Frame { low, high } = self.frame;
        let place = (i - low.0) * (high.1 - low.1 + 1) + (j - low.1);
        usize::try_from(place).is_ok_and(|place| self.stable.get(place).copied().unwrap_or(false))
    }

    fn place(&self, (i, j): Node) -> Point {
        ((i as f64 + 0.5) * self.cell, (j as f64 + 0.5) * self.cell)
    }

    /// The smallest rectangle that holds all stable nodes, and 0.
    fn extent(&self) -> (Point, Point) {
        self.stable_nodes().map(|node| self.place(node)).fold(
            ((0.0, 0.0), (0.0, 0.0)),
            |(low, high), (x, y)| {
                ((smaller(low.0, x), smaller(low.1, y)), (larger(high.0, x), larger(high.1, y)))
            },
        )
    }

    fn touches_its_edge(&self) -> bool {
        let Frame { low, high } = self.frame;
        self.stable_nodes().any(|(i, j)| i == low.0 || i == high.0 || j == low.1 || j == high.1)
    }

    fn loops(&self, stability: &Stability) -> Vec<Vec<Point>> {
        let mut next = self.segments(stability);
        let mut loops = Vec::new();
        while let Some((first, mut line)) = next.pop_first() {
            let mut points = vec![self.crossing(stability, first)];
            while line != first {
                points.push(self.crossing(stability, line));
                let Some(after) = next.remove(&line) else { break };
                line = after;
            }
            points.push(points[0]);
            loops.push(points);
        }
        loops
    }

    /// From each grid line that the boundary crosses to the one that it crosses next.
    fn segments(&self, stability: &Stability) -> BTreeMap<GridLine, GridLine> {
        let mut next = BTreeMap::new();
        let Frame { low, high } = self.frame;
        for i in low.0..high.0 {
            for j in low.1..high.1 {
                // Counter-clockwise.
                let corners = [(i, j), (i + 1, j), (i + 1, j + 1), (i, j + 1)];
                let stable = corners.map(|corner| self.holds(corner));
                let side = |k: usize| GridLine::between(corners[k % 4], corners[(k + 1) % 4]);
                let entry = |k: usize| !stable[k % 4] && stable[(k + 1) % 4];
                for exit in (0..4).filter(|&k| stable[k] && !stable[(k + 1) % 4]) {
                    // Where two opposite corners are stable, the middle tells whether they are joined.
                    let joined = entry(exit + 1) && entry(exit + 3) && {
                        let (x, y) = self.place((i, j));
                        is_stable(stability, (x + 0.5 * self.cell, y + 0.5 * self.cell))
                    };
                    let to = if joined {
                        exit + 1
                    } else {
                        (1..4).map(|turn| exit + 4 - turn).find(|&k| entry(k)).unwrap_or(exit)
                    };
                    next.insert(side(exit), side(to));
                }
            }
        }
        next
    }

    /// The point of a grid line where the boundary crosses it.
    fn crossing(&self, stability: &Stability, line: GridLine) -> Point {
        let (from, to) = line.ends();
        let inside = if self.holds(from) { from } else { to };
        let outside = if inside == from { to } else { from };
        let (mut inside, mut outside) = (self.place(inside), self.place(outside));
        for _ in 0..HALVINGS {
            let middle = (0.5 * (inside.0 + outside.0), 0.5 * (inside.1 + outside.1));
            if is_stable(stability, middle) {
                inside = middle;
            } else {
                outside = middle;
            }
        }
        inside
    }
}

fn is_stable(stability: &Stability, z: Point) -> bool {
    let (u, v) = stability.at(z);
    u * u + v * v <= 1.0
}

/// The line from a node to its right or upper neighbour.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
struct GridLine {
    from: Node,
    upward: bool,
}

impl GridLine {
    fn between(a: Node, b: Node) -> Self {
        Self { from: if a < b { a } else { b }, upward: a.0 == b.0 }
    }

    fn ends(self) -> (Node, Node) {
        let (i, j) = self.from;
        (self.from, if self.upward { (i, j + 1) } else { (i + 1, j) })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::arithmetic::elementary::{cos, sin};
    use crate::scheme::all;

    /// All polynomials of the built-in schemes, embedded weights too.
    fn polynomials() -> Vec<(&'static str, Stability)> {
        let of = |scheme: &'static crate::scheme::Scheme| {
            let exact = &scheme.tableau.exact;
            let weights = std::iter::once(&exact.b).chain(&exact.b_hat);
            weights.map(|weights| (scheme.key, Stability::of_weights(exact, weights))).collect::<Vec<_>>()
        };
        all().iter().flat_map(of).collect()
    }

    /// Area inside a closed loop, positive where it runs counter-clockwise: the shoelace formula.
    fn area(points: &[Point]) -> f64 {
        points.windows(2).map(|pair| pair[0].0 * pair[1].1 - pair[1].0 * pair[0].1).sum::<f64>() / 2.0
    }

    #[test]
    fn every_point_lies_on_the_boundary_and_every_loop_is_closed() {
        for (key, stability) in polynomials() {
            let loops = stability.boundary(100);
            assert!(!loops.is_empty(), "{key}");
            for points in &loops {
                assert_eq!(points.first(), points.last(), "{key}");
                assert!(points.len() > 4, "{key}");
                for &z in points {
                    // A point is known to the last bit of its larger part; |R'| stays below 20 on these boundaries.
                    assert!((stability.amplification(z) - 1.0).abs() < 1e-13, "{key} at {z:?}");
                }
            }
        }
    }

    #[test]
    fn the_region_of_euler_is_the_unit_disc_around_minus_one() {
        let (_, euler) = &polynomials()[0];
        let loops = euler.boundary(200);
        assert_eq!(loops.len(), 1);
        for &(x, y) in &loops[0] {
            assert!(((x + 1.0) * (x + 1.0) + y * y - 1.0).abs() < 1e-14);
        }
        // A polygon of about 4 n / sqrt 2 sides lies inside by a share of pi^2 / (6 n^2), n = 200 here.
        assert!((area(&loops[0]) - std::f64::consts::PI).abs() < 1e-3);
    }

    #[test]
    fn the_outermost_points_are_the_limits_on_the_real_axis() {
        for (key, stability) in polynomials() {
            let axis: Vec<f64> = stability
                .boundary(200)
                .iter()
                .flat_map(|points| points.windows(2))
                .filter(|pair| (pair[0].1 < 0.0) != (pair[1].1 < 0.0))
                .map(|pair| {
                    let share = pair[0].1 / (pair[0].1 - pair[1].1);
                    pair[0].0 + share * (pair[1].0 - pair[0].0)
                })
                .collect();
            let limit = stability.real_limit();
            // Two neighbours, a cell apart, stand on each side of the axis.
            let nearest = axis.iter().map(|x| (x - limit).abs()).fold(f64::INFINITY, smaller);
            assert!(nearest < 1e-3, "{key}: {limit} and {axis:?}");
            assert!(axis.iter().any(|x| x.abs() < 1e-3), "{key}: {axis:?}");
        }
    }

    #[test]
    fn the_area_is_that_of_a_separate_count() {
        // Points of a polar grid, counted: area = sum of r dr dphi over the stable ones.
        for (key, stability) in polynomials() {
            let radius = stability.radius().unwrap();
            let (rings, rays) = (400, 360);
            let mut count = 0.0;
            for ring in 0..rings {
                let r = radius * (f64::from(ring) + 0.5) / f64::from(rings);
                for ray in 0..rays {
                    let phi = std::f64::consts::TAU * (f64::from(ray) + 0.5) / f64::from(rays);
                    if stability.amplification((r * cos(phi), r * sin(phi))) <= 1.0 {
                        count += r;
                    }
                }
            }
            let counted = count * radius / f64::from(rings) * std::f64::consts::TAU / f64::from(rays);
            let outlined: f64 = stability.boundary(200).iter().map(|points| area(points)).sum();
            assert!((outlined / counted - 1.0).abs() < 0.01, "{key}: {outlined} and {counted}");
        }
    }

    #[test]
    fn the_outline_is_the_same_every_time_and_finer_with_more_cells() {
        for (key, stability) in polynomials() {
            assert_eq!(stability.boundary(50), stability.boundary(50), "{key}");
            let points = |n| stability.boundary(n).iter().map(Vec::len).sum::<usize>();
            assert!(points(200) > 3 * points(50), "{key}");
        }
    }

    #[test]
    fn every_pattern_of_nodes_gives_closed_loops() {
        let constant = |value: f64| Stability { exact: vec![], coefficients: vec![value] };
        let cycles = |pattern: u32, middle: &Stability| {
            // Three by three nodes with a rim of unstable ones.
            let mut grid =
                Grid { cell: 1.0, frame: Frame { low: (-2, -2), high: (2, 2) }, stable: vec![false; 25] };
            for node in (0..9).filter(|node| pattern >> node & 1 == 1) {
                grid.stable[(node / 3 + 1) * 5 + node % 3 + 1] = true;
            }
            let mut next = grid.segments(middle);
            let mut cycles = 0;
            while let Some((first, mut line)) = next.pop_first() {
                while line != first {
                    line =
                        next.remove(&line).unwrap_or_else(|| panic!("pattern {pattern:b} has an open end"));
                }
                cycles += 1;
            }
            cycles
        };
        for pattern in 0..512 {
            for middle in [constant(0.5), constant(2.0)] {
                assert_eq!(cycles(pattern, &middle) > 0, pattern > 0, "pattern {pattern:b}");
            }
        }
        // Two nodes across a diagonal are one loop where the middle of their cell is stable, else two.
        for diagonal in [0b000_010_001, 0b000_001_010, 0b010_100_000, 0b100_010_000] {
            assert_eq!((cycles(diagonal, &constant(0.5)), cycles(diagonal, &constant(2.0))), (1, 2));
        }
        // A ring holds an island of unstable points.
        assert_eq!(cycles(0b111_101_111, &constant(2.0)), 2);
    }

    #[test]
    fn a_constant_polynomial_has_no_outline() {
        let exact = crate::scheme::Tableau::read("0 |\n 1 | 1\n b | 0 0").unwrap().exact;
        assert!(Stability::of_weights(&exact, &exact.b).boundary(50).is_empty());
    }
}
