//! The C ABI of the contract: what `include/gridassay_scheme.h` says, member by member, and the export of Rust schemes over it.
//!
//! A plugin crate has `crate-type = ["cdylib"]` and one line, `gridassay_scheme::export_scheme!(MyScheme::default());`.

mod export;
mod layout;
mod macros;
mod plugin_harness;
mod problem;

pub use export::{Plugin, entry};
pub use layout::{CCase, CHarness, CParameter, CState, functions, kind_code, kind_of_code};
pub use problem::{CaseArrays, case_from_c};
