//! The pair of Cash and Karp, 5(4): it propagates order 5.
//! Source: J. R. Cash & A. H. Karp (1990), ACM Trans. Math. Softw. 16, 201-222.
//! Variant: the paper embeds weights of orders 1 to 3 as well, for rates that are rough; only order 4 is kept here.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const CASH_KARP: Drawn = Drawn {
    key: "cash-karp",
    name: "Cash-Karp 5(4)",
    source: "J. R. Cash & A. H. Karp (1990), ACM Trans. Math. Softw. 16, 201-222",
    serves: "For tolerances in the middle range, where rates vary sharply.",
    claim: Claim { order: 5, embedded: Some(4), first_same_as_last: false },
    inside: Inside::Hermite { lifts: 2 },
    tableau: "
       0   |
      1/5  |     1/5
      3/10 |     3/40        9/40
      3/5  |     3/10       -9/10      6/5
       1   |   -11/54        5/2     -70/27         35/27
      7/8  |  1631/55296   175/512   575/13824   44275/110592  253/4096
     ------|----------------------------------------------------------------------
       b   |    37/378        0      250/621       125/594         0      512/1771
       b^  |  2825/27648      0    18575/48384   13525/55296   277/14336    1/4
",
};
