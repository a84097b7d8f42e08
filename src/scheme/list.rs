//! The list of all schemes.

use std::sync::LazyLock;

use super::explicit;
use super::tableau::Scheme;

/// Read once, on first use. A drawing that cannot be read would be left out: a test sees that none is.
static ALL: LazyLock<Vec<Scheme>> =
    LazyLock::new(|| explicit::DRAWN.iter().filter_map(|drawn| drawn.read().ok()).collect());

/// All schemes in the order in which they are listed to users.
pub fn all() -> &'static [Scheme] {
    &ALL
}

/// The scheme with this key.
pub fn find(key: &str) -> Option<&'static Scheme> {
    all().iter().find(|scheme| scheme.key == key)
}
