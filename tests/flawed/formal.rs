//! What the textbooks say of each classical scheme: orders, symbols, stable ranges. Sources stand beside the schemes themselves.

/// Formal properties of a classical scheme.
#[derive(Clone, Debug)]
pub struct Formal {
    pub name: &'static str,
    /// Order in space, and between walls.
    pub space: f64,
    pub wall_space: f64,
    pub time: f64,
    /// Space and time are discretised apart, so that each has an order of its own.
    pub lines: bool,
    pub implicit: bool,
    /// Clips extrema: its order is claimed in L1, with a wider tolerance.
    pub limited: bool,
    pub monotone: bool,
    pub plane: bool,
    /// The Courant number at which its order and its symbol are claimed; no dyadic fraction.
    pub courant: f64,
    pub invariants_courant: Option<f64>,
    pub advection_symbol: Option<String>,
    pub diffusion_symbol: Option<String>,
    pub phase_speed_within: Option<f64>,
    /// Largest stable Courant number, and whether it is the limit itself.
    pub stable_courant: Option<(f64, bool)>,
    pub stable_diffusion: Option<(f64, bool)>,
}

impl Formal {
    /// The least order with a step that falls with the width.
    pub fn both(&self) -> f64 {
        self.wall_space.min(self.time)
    }
}

/// Factors of a space operator for advection, such that z = -c x this, and for diffusion, such that z = -r x this.
fn space_symbols(space: &str) -> (Option<&'static str>, Option<&'static str>) {
    match space {
        "central2" => (Some("i*sin(theta)"), Some("2*(1 - cos(theta))")),
        "central4" => (Some("i*(8*sin(theta) - sin(2*theta))/6"), Some("(15 - 16*cos(theta) + cos(2*theta))/6")),
        "central6" => (
            Some("i*(45*sin(theta) - 9*sin(2*theta) + sin(3*theta))/30"),
            Some("(49/18 - 3*cos(theta) + 3/10*cos(2*theta) - 1/45*cos(3*theta))"),
        ),
        // Lele (1992), eq. 2.1.6 and 2.2.6.
        "pade4" => (Some("i*3*sin(theta)/(2 + cos(theta))"), Some("12*(1 - cos(theta))/(5 + cos(theta))")),
        // Lele (1992), eq. 2.1.7 and 2.2.7.
        "compact6" => (
            Some("i*(14/9*sin(theta) + 1/18*sin(2*theta))/(1 + 2/3*cos(theta))"),
            Some("(24/11*(1 - cos(theta)) + 3/22*(1 - cos(2*theta)))/(1 + 4/11*cos(theta))"),
        ),
        "upwind1" => (Some("(1 - exp(-i*theta))"), None),
        "upwind2" => (Some("(3 - 4*exp(-i*theta) + exp(-2*i*theta))/2"), None),
        "upwind3" => (Some("(2*exp(i*theta) + 3 - 6*exp(-i*theta) + exp(-2*i*theta))/6"), None),
        "upwind5" => (
            Some(
                "(-3*exp(2*i*theta) + 30*exp(i*theta) + 20 - 60*exp(-i*theta) + 15*exp(-2*i*theta) - 2*exp(-3*i*theta))/60",
            ),
            None,
        ),
        _ => (None, None),
    }
}

/// The polynomial of a Runge-Kutta method whose order is its number of stages, in z = -number x factor.
fn runge_kutta(stages: u32, number: &str, factor: &str) -> String {
    let z = format!("(-{number}*{factor})");
    (1..=stages).rev().fold("1".to_owned(), |inner, k| format!("(1 + {z}/{k}*{inner})"))
}

const LAX_WENDROFF: &str = "1 - i*c*sin(theta) - c^2*(1 - cos(theta))";
const BEAM_WARMING: &str = "1 - c/2*(3 - 4*exp(-i*theta) + exp(-2*i*theta)) + c^2/2*(1 - exp(-i*theta))^2";

/// Name, order in space, order in time, symbol, and the largest stable Courant or diffusion number with whether it is exact.
type OneStep = (&'static str, f64, f64, &'static str, (f64, bool));

/// The schemes that take space and time in one.
#[rustfmt::skip]
const ONE_STEP: [OneStep; 13] = [
    ("upwind", 1.0, 1.0, "1 - c*(1 - exp(-i*theta))", (1.0, true)),
    ("lax-friedrichs", 1.0, 1.0, "cos(theta) - i*c*sin(theta)", (1.0, true)),
    ("lax-wendroff", 2.0, 2.0, LAX_WENDROFF, (1.0, true)),
    ("maccormack", 2.0, 2.0, LAX_WENDROFF, (1.0, true)),
    ("beam-warming", 2.0, 2.0, BEAM_WARMING, (2.0, true)),
    ("fromm", 2.0, 2.0, "", (1.0, true)),
    ("leapfrog", 2.0, 2.0, "-i*c*sin(theta) + sqrt(1 - (c*sin(theta))^2)", (1.0, true)),
    ("crank-nicolson-advection", 2.0, 2.0, "(1 - i*c*sin(theta)/2)/(1 + i*c*sin(theta)/2)", (10.0, false)),
    ("implicit-euler-advection", 2.0, 1.0, "1/(1 + i*c*sin(theta))", (10.0, false)),
    ("explicit-euler-diffusion", 2.0, 1.0, "1 - 2*r*(1 - cos(theta))", (0.5, true)),
    ("crank-nicolson-diffusion", 2.0, 2.0, "(1 - r*(1 - cos(theta)))/(1 + r*(1 - cos(theta)))", (10.0, false)),
    ("implicit-euler-diffusion", 2.0, 1.0, "1/(1 + 2*r*(1 - cos(theta)))", (10.0, false)),
    ("du-fort-frankel", 2.0, 1.0, "(2*r*cos(theta) + sqrt(1 - 4*r^2*sin(theta)^2))/(1 + 2*r)", (10.0, false)),
];

/// Largest stable Courant numbers: the extent of the Runge-Kutta method's region on the imaginary axis (sqrt 3 and 2 sqrt 2) over the largest
/// modified wavenumber (1, 1.372, 1.586, sqrt 3, 1.989: Lele 1992), rounded down; for discontinuous Galerkin Cockburn & Shu (2001), table 2.2, rounded down.
const STABLE: [(&str, f64); 10] = [
    ("central2-rk4", 2.82),
    ("central2-ssprk3", 1.73),
    ("central4-rk4", 2.06),
    ("central4-ssprk3", 1.26),
    ("central6-rk4", 1.78),
    ("pade4-rk4", 1.63),
    ("pade4-ssprk3", 0.999),
    ("compact6-rk4", 1.42),
    ("upwind1-rk1", 0.999),
    ("dg-p1", 0.333),
];

/// What is known of a classical scheme.
pub fn formal(name: &'static str) -> Formal {
    let one_step = ONE_STEP.iter().find(|row| row.0 == name);
    let (space, time) = one_step.map_or_else(|| orders_by_name(name), |row| (row.1, row.2));
    let diffuses = name.contains("diffusion") || name == "du-fort-frankel";
    let galerkin = name.starts_with("dg-");
    let mut formal = Formal {
        name,
        space,
        // Compact rows at walls err at a lower order, which rules until the grid is very fine.
        wall_space: if name.starts_with("pade") { 4.0 } else { space },
        time,
        lines: one_step.is_none(),
        implicit: name.contains("crank-nicolson") || name.contains("implicit"),
        limited: name.starts_with("muscl") || name.contains("-muscl"),
        monotone: [
            "upwind",
            "lax-friedrichs",
            "upwind1-rk1",
            "explicit-euler-diffusion",
            "implicit-euler-diffusion",
            "upwind-2d",
            "diffusion-2d",
        ]
        .contains(&name)
            || name.starts_with("muscl")
            || name.starts_with("burgers-g")
            || name.starts_with("burgers-l"),
        plane: name.ends_with("-2d") || name.ends_with("-3d"),
        courant: if galerkin { 0.09 } else { 0.37 },
        invariants_courant: galerkin.then_some(0.09),
        advection_symbol: None,
        diffusion_symbol: None,
        phase_speed_within: galerkin.then_some(1e-3),
        stable_courant: STABLE.iter().find(|row| row.0 == name).map(|row| (row.1, false)),
        stable_diffusion: None,
    };
    if let Some(row) = one_step {
        let symbol = match name {
            "fromm" => format!("0.5*({LAX_WENDROFF}) + 0.5*({BEAM_WARMING})"),
            _ => row.3.to_owned(),
        };
        match diffuses {
            true => (formal.diffusion_symbol, formal.stable_diffusion) = (Some(symbol), Some(row.4)),
            false => (formal.advection_symbol, formal.stable_courant) = (Some(symbol), Some(row.4)),
        }
    } else if let Some((space, stages)) = name.rsplit_once('-') {
        let (advection, diffusion) = space_symbols(space);
        let stages = stages.trim_start_matches("ssp").trim_start_matches("rk").parse().unwrap_or(0);
        formal.advection_symbol = advection.map(|factor| runge_kutta(stages, "c", factor));
        formal.diffusion_symbol = diffusion.map(|factor| runge_kutta(stages, "r", factor));
    }
    formal
}

fn orders_by_name(name: &str) -> (f64, f64) {
    let time = match name.rsplit_once("rk").map(|(_, digits)| digits) {
        Some("1") => 1.0,
        Some("2") => 2.0,
        Some("3") => 3.0,
        Some("4") => 4.0,
        _ => 2.0,
    };
    match name {
        "burgers-godunov"
        | "burgers-lax-friedrichs"
        | "euler-rusanov"
        | "acoustics-upwind"
        | "upwind-2d"
        | "upwind-3d" => (1.0, 1.0),
        "dg-p1" => (2.0, 2.0),
        "dg-p2" => (3.0, 3.0),
        "dg-p3" => (4.0, 4.0),
        _ if name.starts_with("weno5") => (5.0, time),
        _ => {
            let digit = name.split('-').next().and_then(|space| space.chars().last()).and_then(|c| c.to_digit(10));
            (digit.map_or(2.0, f64::from), time)
        }
    }
}
