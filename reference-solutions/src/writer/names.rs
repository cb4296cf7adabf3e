//! Identifiers that every language accepts.

use std::collections::HashSet;

/// Words that one of the languages reserves, functions that the code calls, and names that the code uses itself.
const RESERVED: &str = "alignas alignof and as asm assert async auto await bool break case catch char class const continue crate \
    def default del delete do double elif else end enum except exp extern f64 false finally float fn for from function global goto \
    if impl implicit import in inline int integer is lambda len let log long loop match merge module move mut namespace new none \
    nonlocal not np numpy or parameter pass private program pub public pure raise real real64 ref register restrict return self \
    short signed sizeof static std struct subroutine super switch this throw trait true try type typedef typename union unsafe \
    unsigned use using virtual void volatile where while with yield math erf erfc sin cos tan sqrt abs min max fmin fmax fabs pow \
    asin acos atan atan2 sinh cosh tanh asinh acosh atanh box dyn final gen override priv unsized abstract become macro";

/// Gives out identifiers, each once; upper and lower case count as the same, as in Fortran.
pub(super) struct Names(HashSet<String>);

impl Names {
    pub(super) fn new(taken: &[&str]) -> Names {
        Names(RESERVED.split_whitespace().chain(taken.iter().copied()).map(str::to_lowercase).collect())
    }

    /// `wish`, or the next free name like it.
    pub(super) fn take(&mut self, wish: &str) -> String {
        // Fortran allows no leading underscore and 63 characters.
        let mut stem: String = wish.trim_start_matches('_').chars().take(56).collect();
        if stem.is_empty() {
            stem = "part".into();
        }
        let numbered = (2..).map(|number| format!("{stem}_{number}"));
        let free = std::iter::once(stem.clone()).chain(numbered).find(|name| !self.0.contains(&name.to_lowercase()));
        let name = free.expect("there are always more numbers");
        self.0.insert(name.to_lowercase());
        name
    }
}
