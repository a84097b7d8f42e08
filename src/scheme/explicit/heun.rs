//! Heun's scheme of order 2: the explicit trapezoidal rule.
//! Source: K. Heun (1900), Z. Math. Phys. 45, 23-38; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1.
//! Names vary: some books call it the improved Euler scheme, and some mean by Heun a scheme of order 3.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const HEUN: Drawn = Drawn {
    key: "heun",
    name: "Heun",
    source: "K. Heun (1900), Z. Math. Phys. 45, 23-38",
    serves: "For rates that jump at step points: it evaluates at both ends of a step and nowhere between.",
    claim: Claim { order: 2, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
      1  |  1
     ----|----------
      b  | 1/2  1/2
",
};
