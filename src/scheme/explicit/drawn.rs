//! What the file of a scheme holds, and how it becomes a [`Scheme`].

use crate::scheme::drawing::Misdrawn;
use crate::scheme::order;
use crate::scheme::tableau::{Dense, Scheme, Tableau};

/// A scheme as its file draws it.
pub(in crate::scheme) struct Drawn {
    pub(super) key: &'static str,
    pub(super) name: &'static str,
    pub(super) source: &'static str,
    pub(super) serves: &'static str,
    /// What the source claims. Nothing is computed from it: a test compares.
    #[cfg_attr(not(test), expect(dead_code, reason = "the tests compare the claims with what is computed"))]
    pub(super) claim: Claim,
    pub(super) inside: Inside,
    pub(super) tableau: &'static str,
}

/// What the source of a scheme claims.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Claim {
    pub(super) order: u32,
    pub(super) embedded: Option<u32>,
    pub(super) first_same_as_last: bool,
}

/// How the solution inside a step is made: [`Dense`] before its drawing is read.
pub(super) enum Inside {
    Hermite { lifts: u32 },
    Matched { interpolant: &'static str, lifts: u32 },
}

impl Drawn {
    /// Reads the drawing and computes the orders.
    pub(in crate::scheme) fn read(&self) -> Result<Scheme, Misdrawn> {
        let mut tableau = Tableau::read(self.tableau)?;
        let dense = match self.inside {
            Inside::Hermite { lifts } => Dense::Hermite { lifts },
            Inside::Matched { interpolant, lifts } => {
                tableau = tableau.with_interpolant(interpolant)?;
                Dense::Matched { weights: tableau.interpolant().unwrap_or_default(), lifts }
            }
        };
        Ok(Scheme {
            key: self.key,
            name: self.name,
            source: self.source,
            serves: self.serves,
            drawing: self.tableau,
            order: order::of_weights(&tableau.exact, &tableau.exact.b),
            embedded_order: tableau
                .exact
                .b_hat
                .as_ref()
                .map(|b_hat| order::of_weights(&tableau.exact, b_hat)),
            tableau,
            dense,
        })
    }
}
