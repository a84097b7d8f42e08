//! Ralston's scheme of order 2, whose bound of the local error is the least of all with two stages.
//! Source: A. Ralston (1962), Math. Comp. 16, 431-437; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.3.
//! Variant: some textbooks print node 3/4 with weights 1/3 and 2/3 under this name. It has order 2 as well, but
//! not the least bound, which belongs to node 2/3.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const RALSTON: Drawn = Drawn {
    key: "ralston",
    name: "Ralston",
    source: "A. Ralston (1962), Math. Comp. 16, 431-437",
    serves: "The best choice at two evaluations a step where the rates are smooth.",
    claim: Claim { order: 2, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
     2/3 | 2/3
     ----|----------
      b  | 1/4  3/4
",
};
