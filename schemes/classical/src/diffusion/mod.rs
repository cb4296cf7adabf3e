//! Schemes for u_t = nu u_xx + S. Throughout r = nu dt / h^2 and theta = k h.

pub mod du_fort_frankel;
pub mod one_step;
