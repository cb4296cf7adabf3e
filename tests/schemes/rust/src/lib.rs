//! Schemes of the tests as a person's plugin crate would hold them.

pub mod everything;
pub mod faulty;
pub mod upwind;

use gridassay_scheme::Scheme;

/// The scheme of that name; the first one by default.
pub fn scheme(name: Option<&str>) -> Option<Box<dyn Scheme>> {
    match name {
        None | Some("upwind") => Some(Box::new(upwind::Upwind::default())),
        Some("everything") => Some(Box::new(everything::Everything::default())),
        Some(other) => {
            other.strip_prefix("faulty-").map(|fault| Box::new(faulty::Faulty::new(fault)) as Box<dyn Scheme>)
        }
    }
}

gridassay_scheme::export_schemes!(scheme);
