//! Problems that go beside those of the catalogue: every mix of walls with data that vary in time, sources, jumps.

use gridassay::scheme::{BoundaryKind, Offer};

/// The kinds of both walls.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Walls {
    Values,
    GradientBelow,
    GradientAbove,
}

impl Walls {
    /// Those that an offer takes.
    pub fn of(offer: &Offer) -> Vec<Self> {
        let takes = |kind: BoundaryKind| offer.boundaries.contains(&kind);
        match (takes(BoundaryKind::Value), takes(BoundaryKind::Gradient)) {
            (true, true) => vec![Self::Values, Self::GradientBelow, Self::GradientAbove],
            (true, false) => vec![Self::Values],
            _ => Vec::new(),
        }
    }

    pub fn word(self) -> &'static str {
        match self {
            Self::Values => "values",
            Self::GradientBelow => "gradient-below",
            Self::GradientAbove => "gradient-above",
        }
    }

    fn kinds(self) -> &'static str {
        match self {
            Self::Values => "[[\"value\", \"value\"]]",
            Self::GradientBelow => "[[\"gradient\", \"value\"]]",
            Self::GradientAbove => "[[\"value\", \"gradient\"]]",
        }
    }
}

/// The mean keeps the error of a wrong wall below half of the solution: above it, a level counts as not resolved.
const SOLUTION: &str = "4 + sin(2.3*x - 1.9*t + 0.7) + exp(0.5*x - 0.6*t)";

fn between_walls(equation: &str, parameters: &str, walls: Walls, solution: &str, time: &str) -> String {
    format!(
        "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"{equation}\"\ndimensions = 1\nsource = \"derived\"\n\
         [parameters]\n{parameters}\n[solution]\nu = \"{solution}\"\n\
         [domain]\nlower = [0.3]\nupper = [2.0]\nboundaries = {}\n[time]\n{time}\n",
        walls.kinds()
    )
}

const MOVING: &str = "start = 0.1\nfinal = 0.7";

/// Diffusion with a source between walls.
pub fn diffusion(walls: Walls, diffusivity: f64) -> String {
    between_walls("diffusion", &format!("diffusivity = {diffusivity}"), walls, SOLUTION, MOVING)
}

/// Advection and diffusion with a source between walls with values that vary in time.
pub fn advection_diffusion(diffusivity: f64) -> String {
    let parameters = format!("velocity = [0.8]\ndiffusivity = {diffusivity}");
    between_walls("advection_diffusion", &parameters, Walls::Values, SOLUTION, MOVING)
}

/// Burgers' equation with a source between walls with values that vary in time.
pub fn burgers_walls() -> String {
    between_walls("burgers", "viscosity = 0.1", Walls::Values, "sin(2.3*x - 1.9*t + 0.7) + exp(0.5*x - 0.6*t)", MOVING)
}

/// A steady equation with a source.
pub fn steady(equation: &str, walls: Walls) -> String {
    // Enough diffusion for a gradient at the inflow: its error grows downstream like exp(a x / nu).
    let parameters = match equation {
        "poisson" => "conductivity = 0.6",
        "diffusion" => "diffusivity = 0.6",
        _ => "velocity = [0.8]\ndiffusivity = 0.6",
    };
    between_walls(equation, parameters, walls, "20 + sin(2.3*x + 0.7) + exp(0.5*x)", "steady = true")
}

/// A rarefaction from -1 to 2 that starts at 0.8, through the sonic point, and a shock back to -1 that starts at 1.6 (speed 1/2).
pub fn burgers_jumps() -> String {
    "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"burgers\"\ndimensions = 1\n\
     [parameters]\nviscosity = 0\n[solution]\nu = \"if(x < 1.6 + 0.5*t, max(-1, min(2, (x - 0.8)/t)), -1)\"\n\
     [domain]\nlower = [0.3]\nupper = [2.0]\nboundaries = [\"periodic\"]\n[time]\nstart = 1e-6\nfinal = 0.19\n\
     [breaks]\nx = [\"0.8 - t\", \"0.8 + 2*t\", \"1.6 + 0.5*t\"]\n"
        .to_owned()
}

/// Diffusion in the plane with a source that varies in time, and another one along x than along y.
pub fn plane_diffusion() -> String {
    "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"diffusion\"\ndimensions = 2\nsource = \"derived\"\n\
     [parameters]\ndiffusivity = 0.3\n[solution]\nu = \"2 + sin(2*pi*x/1.7 + 0.3)*cos(2*pi*y/0.9 - 1.3*t)\"\n\
     [domain]\nlower = [0.3, -0.2]\nupper = [2.0, 0.7]\nboundaries = [\"periodic\", \"periodic\"]\n[time]\nstart = 0.1\nfinal = 0.3\n"
        .to_owned()
}

/// Burgers' equation with a source on a periodic grid, through zero.
pub fn burgers_source() -> String {
    "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"burgers\"\ndimensions = 1\nsource = \"derived\"\n\
     [parameters]\nviscosity = 0\n[solution]\nu = \"0.1 + 0.4*sin(2*pi*x/1.7 - 0.9*t + 0.3)\"\n\
     [domain]\nlower = [0.3]\nupper = [2.0]\nboundaries = [\"periodic\"]\n[time]\nstart = 0.1\nfinal = 0.6\n"
        .to_owned()
}

/// Poisson's equation with a boundary layer.
pub fn steep_poisson() -> String {
    between_walls("poisson", "conductivity = 1.3", Walls::Values, "exp(2.7*x) - 3*x^2 + sin(4*x)", "steady = true")
}

/// A wave and its first harmonic, carried along.
pub fn two_waves(second: f64, phase: f64) -> String {
    let angle = |k: u32| format!("{k}*2*pi*(x - velocity*t)/1.7");
    format!(
        "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"advection\"\ndimensions = 1\n\
         [parameters]\nvelocity = [0.7]\n[solution]\nu = \"0.3 + 0.8*sin({} + {phase}) + {second}*sin({})\"\n\
         [domain]\nlower = [0.3]\nupper = [2.0]\nboundaries = [\"periodic\"]\n[time]\nstart = 0.1\nfinal = 0.9\n",
        angle(1),
        angle(2)
    )
}

/// Waves in all three directions that die out.
pub fn decay_3d(diffusivity: f64) -> String {
    format!(
        "name = \"own\"\ntitle = \"own\"\nreference = \"own\"\nequation = \"diffusion\"\ndimensions = 3\n\
         [parameters]\ndiffusivity = {diffusivity}\n[names]\nk_x = \"2*pi/1.7\"\nk_y = \"2*pi/1.3\"\nk_z = \"2*pi/0.9\"\n\
         [solution]\nu = \"0.4 + exp(-diffusivity*(k_x^2 + k_y^2 + k_z^2)*t)*sin(k_x*x + 0.3)*cos(k_y*y)*sin(k_z*z - 0.4)\"\n\
         [domain]\nlower = [0.3, -0.2, 0.1]\nupper = [2.0, 1.1, 1.0]\nboundaries = [\"periodic\", \"periodic\", \"periodic\"]\n\
         [time]\nstart = 0.1\nfinal = 0.3\n"
    )
}
