//! The scan sheet without a browser.
fn main() {}
