//! The WebAssembly surface: thin and typed.
