//! The macros that write the entry points of a plugin.

/// Exports one scheme, made by an expression, as a plugin: the entry points of the C ABI.
///
/// A crate that is also linked as an ordinary library beside another plugin puts this behind a feature, since the names of the entry
/// points are the same in every plugin.
///
/// ```
/// # use gridassay_scheme::{Case, Description, Harness, Nodes, Offer, Operation, Scheme, SchemeError};
/// #[derive(Default)]
/// struct Upwind;
/// # impl Scheme for Upwind {
/// #     fn describe(&self) -> Description {
/// #         Description::new("upwind", "1.0", vec![Offer::new("advection", &[Operation::Advance])])
/// #     }
/// #     fn prepare(&mut self, _: &Case, _: &mut dyn Harness) -> Result<Option<Nodes>, SchemeError> {
/// #         Ok(None)
/// #     }
/// # }
/// // impl Scheme for Upwind { ... }
/// gridassay_scheme::export_scheme!(Upwind::default());
/// # fn main() {
/// # assert_eq!(gridassay_entry_points::gridassay_contract(), 1);
/// # assert!(!gridassay_entry_points::gridassay_describe().is_null());
/// # }
/// ```
#[macro_export]
macro_rules! export_scheme {
    ($scheme:expr) => {
        $crate::export_schemes!(|name: Option<&str>| -> Option<Box<dyn $crate::Scheme>> {
            let scheme = $scheme;
            let fits = name.is_none_or(|name| $crate::Scheme::describe(&scheme).name == name);
            fits.then(|| Box::new(scheme) as Box<dyn $crate::Scheme>)
        });
    };
}

/// Exports several schemes as one plugin: a function from a name to a scheme, where `None` asks for the default one.
///
/// ```
/// # use gridassay_scheme::Scheme;
/// fn scheme(name: Option<&str>) -> Option<Box<dyn Scheme>> {
///     match name.unwrap_or("upwind") {
///         // "upwind" => Some(Box::new(Upwind::default())),
///         _ => None,
///     }
/// }
/// gridassay_scheme::export_schemes!(scheme);
/// # fn main() {
/// # assert!(gridassay_entry_points::gridassay_describe().is_null());
/// # }
/// ```
#[macro_export]
macro_rules! export_schemes {
    ($make:expr) => {
        /// The entry points of the C ABI; `gridassay_scheme.h` documents each.
        #[allow(missing_docs)]
        pub mod gridassay_entry_points {
            use super::*;
            use $crate::abi::{CCase, CHarness, CState, Plugin, entry};

            static PLUGIN: Plugin = Plugin::new($make);

            #[unsafe(no_mangle)]
            pub extern "C" fn gridassay_contract() -> i32 {
                entry::contract()
            }
            #[unsafe(no_mangle)]
            pub extern "C" fn gridassay_describe() -> *const ::std::ffi::c_char {
                entry::describe(&PLUGIN)
            }
            #[unsafe(no_mangle)]
            pub extern "C" fn gridassay_message() -> *const ::std::ffi::c_char {
                entry::message(&PLUGIN)
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_select(name: *const ::std::ffi::c_char) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::select(&PLUGIN, name) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_prepare(case: *const CCase, harness: *const CHarness) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::prepare(&PLUGIN, case, harness) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_nodes(capacity: i32, offsets: *mut f64, weights: *mut f64) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::nodes(&PLUGIN, capacity, offsets, weights) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_advance(
                time: f64,
                step: f64,
                steps: i64,
                state: *mut CState,
                earlier: *mut CState,
                harness: *const CHarness,
            ) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::advance(&PLUGIN, [time, step], steps, state, earlier, harness) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_march(
                time: f64,
                until: f64,
                tolerance: f64,
                state: *mut CState,
                steps: *mut i64,
                harness: *const CHarness,
            ) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::march(&PLUGIN, [time, until, tolerance], state, steps, harness) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_rate(
                time: f64,
                state: *const CState,
                rate: *mut CState,
                harness: *const CHarness,
            ) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::rate(&PLUGIN, time, state, rate, harness) }
            }
            #[unsafe(no_mangle)]
            pub unsafe extern "C" fn gridassay_solve(
                state: *mut CState,
                iterations: *mut i64,
                residual: *mut f64,
                harness: *const CHarness,
            ) -> i32 {
                // SAFETY: the harness keeps to the header.
                unsafe { entry::solve(&PLUGIN, state, iterations, residual, harness) }
            }
        }
    };
}
