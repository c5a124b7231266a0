//! Every command of the repository.
fn main() {}
