//! Exact propagation: between events a linear circuit has a closed solution.
//!
//! ```text
//! sources    -> polynomials times exponentials and sines, as states of their own     terms.rs
//! topology   -> X' = A X over the independent states, the sources' and 1             system.rs
//! exp(A h)-1 -> Taylor polynomial where |A h| <= 1/2, then doubled                   propagator.rs
//! march      -> points so close that the cubic between them is right to a tolerance  sampling.rs
//! ```
//!
//! The points are exact to rounding, some `2 eps sqrt(|A| t)` as long as the matrix is not far
//! from a normal one (measured; the energy balance shows more where there is more); between them a shot is the same cubic of
//! values and slopes as with any method, and its error, of order 4, is what a finer mesh shows.
//! Events, restarts, readings and bounds are those of the stepping methods: this is one more rule
//! of `step.rs`.

mod propagator;
mod sampling;
mod system;
mod terms;

pub(crate) use system::System;
