//! Kutta's scheme of order 3.
//! Source: W. Kutta (1901), Z. Math. Phys. 46, 435-453; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const KUTTA3: Drawn = Drawn {
    key: "kutta3",
    name: "Kutta 3",
    source: "W. Kutta (1901), Z. Math. Phys. 46, 435-453",
    serves: "Between the schemes of orders 2 and 4; it damps slow oscillations, where those of order 2 make them grow.",
    claim: Claim { order: 3, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
     1/2 | 1/2
      1  | -1    2
     ----|---------------
      b  | 1/6  2/3  1/6
",
};
