//! Numerical routines shared by the rooms.

pub mod faddeeva;
pub mod gauss_legendre;
pub mod minimise;
pub mod polynomial;
pub mod probability;
pub mod quadrature;
pub mod random;
