//! Kutta's scheme of order 4, "the" Runge-Kutta scheme.
//! Source: W. Kutta (1901), Z. Math. Phys. 46, 435-453; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const RK4: Drawn = Drawn {
    key: "rk4",
    name: "Runge-Kutta 4",
    source: "W. Kutta (1901), Z. Math. Phys. 46, 435-453",
    serves: "The scheme to start with where the rates are smooth, not stiff, and a fixed step is wanted.",
    claim: Claim { order: 4, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 1 },
    tableau: "
      0  |
     1/2 | 1/2
     1/2 |  0   1/2
      1  |  0    0    1
     ----|--------------------
      b  | 1/6  1/3  1/3  1/6
",
};
