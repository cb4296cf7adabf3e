//! Schemes for u_t + a u_x = nu u_xx + S by the method of lines.

pub mod burgers;
pub mod central;
pub mod compact;
pub mod steady;
