//! A search for the least cost over the unit box, where each score may take a flight.
//!
//! Covariance matrix adaptation with restarts of doubled population does most of it; a downhill
//! simplex from the best found finishes. Feasible candidates come before infeasible ones. A search
//! is a plain value: written down after any generation and read again, it goes on to the same bits,
//! on any number of threads. Of noise it knows nothing, nor of gradients or of several costs.
//!
//! # Sources
//!
//! Hansen, *The CMA Evolution Strategy: A Tutorial*, arXiv:1604.00772; Auger & Hansen, *A restart
//! CMA evolution strategy with increasing population size*, CEC 2005; Deb, *An efficient constraint
//! handling method for genetic algorithms*, CMAME 186, 2000; Nelder & Mead, *A simplex method for
//! function minimization*, The Computer Journal 7, 1965 (argmin's).

mod cma;
mod error;
mod executor;
mod faces;
mod plan;
mod score;
mod search;
mod simplex;
mod stall;
mod strategy;

pub use error::OptimiserError;
pub use executor::Scored;
pub use plan::Plan;
pub use score::{Objective, Score};
pub use search::{Generation, Search, Stage};
pub use strategy::Strategy;
