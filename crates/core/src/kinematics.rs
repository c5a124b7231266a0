//! Two-body kinematics: lambda, break-up momentum, Mandelstam variables.
