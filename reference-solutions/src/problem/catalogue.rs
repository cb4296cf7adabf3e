//! The problems that come with the program.

/// Name and text of every problem, in the order of the equations.
macro_rules! catalogue {
    ($($name:literal),* $(,)?) => {
        /// Names, in the order in which they are listed.
        pub(super) const NAMES: &[&str] = &[$($name),*];
        const TEXTS: &[&str] = &[$(include_str!(concat!("../../catalogue/", $name, ".toml"))),*];
    };
}

catalogue![
    "travelling-sine",
    "travelling-gaussian",
    "square-wave",
    "varying-frequency-sine",
    "oblique-sine",
    "rotating-cone",
    "slotted-disc",
    "swirling-deformation",
    "oblique-sine-3d",
    "decaying-sine",
    "decaying-sine-2d",
    "decaying-sine-3d",
    "heat-kernel",
    "dirichlet-series",
    "neumann-series",
    "varying-diffusivity",
    "travelling-decaying-sine",
    "gaussian-hill",
    "boundary-layer",
    "moving-boundary-values",
    "dispersive-sine",
    "burgers-front",
    "burgers-periodic",
    "burgers-sine",
    "burgers-steepening",
    "burgers-shock",
    "burgers-rarefaction",
    "manufactured-burgers-2d",
    "acoustic-waves",
    "acoustic-oblique-wave",
    "acoustic-standing-wave",
    "manufactured-shallow-water",
    "manufactured-shallow-water-2d",
    "dam-break-wet",
    "dam-break-dry",
    "still-water",
    "entropy-wave",
    "acoustic-simple-wave",
    "isentropic-vortex",
    "toro-1",
    "toro-2",
    "toro-3",
    "toro-4",
    "toro-5",
    "manufactured-euler-1d",
    "manufactured-euler-3d",
    "roy-subsonic-euler",
    "roy-supersonic-euler",
    "roy-navier-stokes",
    "manufactured-navier-stokes",
    "taylor-green",
    "kovasznay",
    "stokes-second-problem",
    "couette-start-up",
    "poiseuille-flow",
    "ethier-steinman",
    "manufactured-incompressible-walls",
    "manufactured-poisson",
    "manufactured-poisson-2d",
    "manufactured-poisson-3d",
    "varying-conductivity",
    "neumann-poisson",
];

/// The text of a problem of the catalogue.
pub(super) fn text(name: &str) -> Option<&'static str> {
    NAMES.iter().position(|known| *known == name).map(|index| TEXTS[index])
}

/// Names that share most of their letter pairs with `name`, best first; at most three.
pub(super) fn near(name: &str) -> Vec<&'static str> {
    let mut scored: Vec<_> = NAMES.iter().map(|known| (similarity(name, known), *known)).collect();
    scored.sort_by(|a, b| b.0.total_cmp(&a.0));
    scored.into_iter().filter(|(score, _)| *score >= 0.4).take(3).map(|(_, known)| known).collect()
}

/// Dice's coefficient of the pairs of neighbouring letters: 1 for equal texts, 0 for texts without a common pair.
fn similarity(a: &str, b: &str) -> f64 {
    let pairs = |text: &str| -> Vec<(char, char)> {
        let letters: Vec<char> = text.to_lowercase().chars().filter(|c| c.is_alphanumeric()).collect();
        letters.windows(2).map(|pair| (pair[0], pair[1])).collect()
    };
    let (first, mut second) = (pairs(a), pairs(b));
    let total = first.len() + second.len();
    let mut common = 0;
    for pair in first {
        if let Some(index) = second.iter().position(|other| *other == pair) {
            second.swap_remove(index);
            common += 1;
        }
    }
    2.0 * f64::from(common) / total.max(1) as f64
}
