//! The pair of Bogacki and Shampine, 3(2): it propagates order 3, and its last stage is the first of the next step.
//! Source: P. Bogacki & L. F. Shampine (1989), Appl. Math. Lett. 2, 321-325.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const BOGACKI_SHAMPINE: Drawn = Drawn {
    key: "bogacki-shampine",
    name: "Bogacki-Shampine 3(2)",
    source: "P. Bogacki & L. F. Shampine (1989), Appl. Math. Lett. 2, 321-325",
    serves: "For coarse tolerances, and for rates with kinks, where a higher order gains nothing.",
    claim: Claim { order: 3, embedded: Some(2), first_same_as_last: true },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
     1/2 | 1/2
     3/4 |  0    3/4
      1  | 2/9   1/3  4/9
     ----|---------------------
      b  | 2/9   1/3  4/9   0
      b^ | 7/24  1/4  1/3  1/8
",
};
