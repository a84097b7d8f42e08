//! Kutta's second scheme of order 4, the 3/8 rule.
//! Source: W. Kutta (1901), Z. Math. Phys. 46, 435-453; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const THREE_EIGHTHS: Drawn = Drawn {
    key: "three-eighths",
    name: "Kutta 3/8",
    source: "W. Kutta (1901), Z. Math. Phys. 46, 435-453",
    serves: "In place of rk4 where a somewhat smaller error constant at the same cost is worth it.",
    claim: Claim { order: 4, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 1 },
    tableau: "
      0  |
     1/3 |  1/3
     2/3 | -1/3   1
      1  |   1   -1    1
     ----|---------------------
      b  |  1/8  3/8  3/8  1/8
",
};
