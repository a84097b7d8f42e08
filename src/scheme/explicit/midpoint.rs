//! The explicit midpoint rule, of order 2.
//! Source: C. Runge (1895), Math. Ann. 46, 167-178; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1.
//! Names vary: some books call it the modified Euler or the improved polygon scheme.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const MIDPOINT: Drawn = Drawn {
    key: "midpoint",
    name: "Midpoint",
    source: "C. Runge (1895), Math. Ann. 46, 167-178",
    serves: "For rates that are costly or rough, where two evaluations a step are enough.",
    claim: Claim { order: 2, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
     1/2 | 1/2
     ----|----------
      b  |  0    1
",
};
