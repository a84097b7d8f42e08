//! Euler's scheme, of order 1.
//! Source: L. Euler (1768), Institutionum calculi integralis I, sect. II ch. VII; Hairer, Nørsett & Wanner I
//! (2nd ed. 1993), sect. I.7.

use super::drawn::{Claim, Drawn, Inside};

pub(super) const EULER: Drawn = Drawn {
    key: "euler",
    name: "Euler",
    source: "L. Euler (1768), Institutionum calculi integralis I, sect. II ch. VII",
    serves: "For teaching and for models that are rough anyway. Halving the step only halves its error.",
    claim: Claim { order: 1, embedded: None, first_same_as_last: false },
    inside: Inside::Hermite { lifts: 0 },
    tableau: "
      0  |
     ----|----
      b  |  1
",
};
