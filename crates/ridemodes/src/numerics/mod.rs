//! Numbers the physics is generic in, and the small algorithms that no library brings.

mod assignment;
mod cholesky;
mod dual;
mod scalar;
mod symmetric;

pub(crate) use assignment::best_assignment;
pub(crate) use cholesky::rank_revealing;
pub use dual::Dual;
pub use scalar::Scalar;
pub(crate) use symmetric::SymmetricFactor;
