//! Eigenvalues (to be replaced at the next merge).

/// None yet.
pub fn eigenvalues(_matrix: &[f64], _n: usize) -> Option<Vec<(f64, f64)>> {
    None
}
