//! Fits: likelihoods, minimiser, intervals.
