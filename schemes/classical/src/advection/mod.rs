//! Schemes for u_t + a u_x = 0, periodic, either sign of a. Throughout c = a dt / h and theta = k h.

pub mod implicit;
pub mod leapfrog;
pub mod maccormack;
pub mod one_step;
