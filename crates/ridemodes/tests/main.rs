//! Integration tests of the public interface, in one binary.
//!
//! What they compare with is worked out here on its own (`support`, `oil`) or published; the source stands
//! beside each check, with "from memory" where the text itself was not at hand. Reference cases are in
//! `cases/*.toml`; their format is described in `cases.rs`.

mod cases;
mod coupling;
mod decouplings;
mod elements;
mod equilibrium;
mod extremes;
mod faults;
mod file;
mod invariants;
mod layers;
mod matrices;
mod motions;
mod networks;
mod oil;
mod paths;
mod poles;
mod random;
mod sensitivities;
mod shares;
mod spectra;
mod statics;
mod support;
mod sweeps;
mod text;
