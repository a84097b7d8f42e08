//! Fehlberg's pair 4(5): it propagates the weights of order 4, for which it was made.
//! Source: E. Fehlberg (1969), NASA TR R-315, formula 2; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.4.
//! Variants: many programs propagate the weights of order 5 (local extrapolation) under the same name: then the
//! rows `b` and `b^` change places. Fehlberg's formula 1, with nodes 0, 2/9, 1/3, 3/4, 1, 5/6, is another pair.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const FEHLBERG: Drawn = Drawn {
    key: "fehlberg",
    name: "Fehlberg 4(5)",
    source: "E. Fehlberg (1969), NASA TR R-315, formula 2",
    serves: "To repeat older work that used it. For new work, pairs that propagate order 5 give more for the same cost.",
    claim: Claim { order: 4, embedded: Some(5), first_same_as_last: false },
    inside: Inside::Hermite { lifts: 1 },
    tableau: "
       0   |
      1/4  |    1/4
      3/8  |    3/32        9/32
     12/13 | 1932/2197  -7200/2197   7296/2197
       1   |  439/216       -8       3680/513    -845/4104
      1/2  |   -8/27         2      -3544/2565   1859/4104   -11/40
     ------|--------------------------------------------------------------
       b   |   25/216        0       1408/2565   2197/4104    -1/5     0
       b^  |   16/135        0       6656/12825 28561/56430   -9/50   2/55
",
};
