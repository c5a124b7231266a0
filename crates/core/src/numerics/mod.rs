//! Numerical routines shared by the rooms.
