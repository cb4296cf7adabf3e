//! Generic parameters inside an offer, the speeds that they imply, and the step.

use gridassay_reference::equation::Equation;
use gridassay_scheme::{Grid, Offer};

use super::states;
use crate::claims::InvariantsRequest;
use crate::record::Parameters;
use crate::studies::Stop;
use crate::studies::setting::Numbers;

/// Courant and diffusion numbers by number of dimensions, where the person gave none: inside the stable and monotone range of common explicit schemes,
/// which in d dimensions is about 1/d of that in one; no dyadic fractions.
const COURANT: [f64; 3] = [0.37, 0.27, 0.19];
const DIFFUSION: [f64; 3] = [0.17, 0.12, 0.08];
/// mu dt / h^3, for the equation that has this number alone.
const DISPERSION: f64 = 0.07;

/// Parameters with the step and the numbers that belong to them.
#[derive(Clone, Debug)]
pub struct Motion {
    /// The equation's parameters.
    pub parameters: Parameters,
    /// The step.
    pub step: f64,
    /// The numbers as realised.
    pub numbers: Numbers,
}

/// Every parameter of the contract's equations, generic: unit values would hide powers of them, gamma = 1.4 a hard-coded 1.4.
fn generic(equation: &str, dimensions: usize) -> Parameters {
    let velocity = |scale: f64| ("velocity", [0.83, 0.59, 0.71][..dimensions].iter().map(|a| scale * a).collect());
    let pairs: Vec<(&str, Vec<f64>)> = match equation {
        "advection" => vec![velocity(1.0)],
        "diffusion" => vec![("diffusivity", vec![0.0371])],
        "advection_diffusion" => vec![velocity(1.0), ("diffusivity", vec![0.0371])],
        "dispersion" => vec![("dispersion", vec![0.0137])],
        "burgers" => vec![("viscosity", vec![0.0])],
        "acoustics" => vec![velocity(0.3), ("density", vec![1.31]), ("sound_speed", vec![0.77])],
        "shallow_water" => vec![("gravity", vec![2.3])],
        "euler" => vec![("gamma", vec![1.37])],
        "navier_stokes" => vec![
            ("gamma", vec![1.37]),
            ("gas_constant", vec![0.87]),
            ("viscosity", vec![0.0113]),
            ("prandtl", vec![0.74]),
        ],
        "incompressible" => vec![("viscosity", vec![0.0171])],
        _ => Vec::new(),
    };
    pairs.into_iter().map(|(name, values)| (name.to_owned(), values)).collect()
}

/// Whether the motion is in the states rather than in a parameter.
pub fn states_move(equation: &str) -> bool {
    matches!(equation, "burgers" | "shallow_water" | "euler" | "navier_stokes" | "incompressible")
}

/// The signs of the motion to be tried: all of them where each direction has its own, two where there is one for all.
pub fn signs(equation: &str, dimensions: usize, fixed: &Parameters) -> Vec<Vec<f64>> {
    let one_for_all = matches!(equation, "burgers" | "dispersion");
    let given = ["velocity", "dispersion"].into_iter().any(|name| fixed.contains_key(name));
    if given || matches!(equation, "diffusion" | "poisson") {
        return vec![vec![1.0; dimensions]];
    }
    if one_for_all {
        return vec![vec![1.0; dimensions], vec![-1.0; dimensions]];
    }
    let sign = |combination: usize, axis: usize| if combination >> axis & 1 == 0 { 1.0 } else { -1.0 };
    (0..1 << dimensions).map(|combination| (0..dimensions).map(|axis| sign(combination, axis)).collect()).collect()
}

/// The person's parameters where they are given, else generic ones with the motion along `signs`, moved to the nearest value that `offer` takes. A motion
/// in the other direction is left as it is: the offer then does not take it.
///
/// # Errors
/// Parameters that the equation does not have, or with a wrong number of components.
pub fn within(offer: &Offer, dimensions: usize, fixed: &Parameters, signs: &[f64]) -> Result<Parameters, Stop> {
    let equation = offer.equation.as_str();
    let mut parameters = generic(equation, dimensions);
    for (name, values) in &mut parameters {
        let moves = name == "velocity" || name == "dispersion";
        for (component, value) in values.iter_mut().enumerate() {
            let wanted = if moves { *value * signs[component] } else { *value };
            let range = offer.parameters.get(name).map_or([None, None], |range| range.component(component));
            let taken = range[0].map_or(wanted, |lower| wanted.max(lower));
            let taken = range[1].map_or(taken, |upper| taken.min(upper));
            let must_move = moves && equation != "acoustics";
            *value = if must_move && taken * wanted <= 0.0 { wanted } else { taken };
        }
    }
    for (name, values) in fixed {
        let components = components_of(equation, dimensions, name)?;
        if values.len() != components {
            let message = format!("`{name}` has {components} component(s) here, not {}", values.len());
            return Err(Stop::Request(message));
        }
        parameters.insert(name.clone(), values.clone());
    }
    Ok(parameters)
}

fn components_of(equation: &str, dimensions: usize, name: &str) -> Result<usize, Stop> {
    let known = Equation::named(equation).map_err(|error| Stop::Request(error.to_string()))?;
    let found = known.parameters().iter().find(|parameter| parameter.name == name);
    found.map(|parameter| parameter.component_names(dimensions).len()).ok_or_else(|| {
        let names: Vec<&str> = known.parameters().iter().map(|parameter| parameter.name.as_str()).collect();
        Stop::Request(format!("`{equation}` has no parameter `{name}`; it has {}", names.join(", ")))
    })
}

/// The step on `grid`: from the person's numbers, else the largest that keeps every number within the harness's own. Where Courant and diffusion number are
/// both given and the diffusivity is open, it follows from them.
///
/// # Errors
/// Numbers that do not go with the equation.
pub fn step(request: &InvariantsRequest, parameters: &Parameters, grid: &Grid) -> Result<Motion, Stop> {
    let (equation, d) = (request.equation.as_str(), grid.dimensions());
    let mut parameters = parameters.clone();
    let crossings = speeds(equation, &parameters, d, 1.0).and_then(|speeds| {
        let rate = speeds.iter().enumerate().map(|(axis, speed)| speed / grid.spacing(axis)).fold(0.0, f64::max);
        (rate > 0.0).then_some(rate)
    });
    let spreading_of = |nu: f64| (0..d).map(|axis| nu / grid.spacing(axis).powi(2)).fold(0.0, f64::max);
    let missing =
        |number: &str, what: &str| Stop::Request(format!("`{number}` is given, but nothing {what} in `{equation}`"));
    if let Some(courant) = request.courant {
        let step = courant / crossings.ok_or_else(|| missing("courant", "moves"))?;
        if let Some(number) = request.diffusion_number {
            if !parameters.contains_key("diffusivity") || request.parameters.contains_key("diffusivity") {
                let message =
                    "give one of `courant` and `diffusion_number`: with the parameters given, the other follows";
                return Err(Stop::Request(message.to_owned()));
            }
            parameters.insert("diffusivity".to_owned(), vec![number / (step * spreading_of(1.0))]);
        }
        return Ok(realised(equation, parameters, step, crossings, &spreading_of));
    }
    let spreading = diffusivity(equation, &parameters).map(&spreading_of).filter(|rate| *rate > 0.0);
    if let Some(number) = request.diffusion_number {
        let step = number / spreading.ok_or_else(|| missing("diffusion_number", "diffuses"))?;
        return Ok(realised(equation, parameters, step, crossings, &spreading_of));
    }
    let by_courant = crossings.map(|rate| COURANT[d - 1] / rate);
    let by_diffusion = spreading.map(|rate| DIFFUSION[d - 1] / rate);
    let by_dispersion = parameters.get("dispersion").map(|mu| DISPERSION * grid.spacing(0).powi(3) / mu[0].abs());
    let bounds = [by_courant, by_diffusion, by_dispersion];
    let step = bounds.into_iter().flatten().filter(|step| step.is_finite()).reduce(f64::min);
    let nothing = || Stop::Request(format!("nothing moves or spreads in `{equation}` with these parameters"));
    Ok(realised(equation, parameters, step.ok_or_else(nothing)?, crossings, &spreading_of))
}

fn realised(
    equation: &str,
    parameters: Parameters,
    step: f64,
    crossings: Option<f64>,
    spreading_of: &impl Fn(f64) -> f64,
) -> Motion {
    let spreading = diffusivity(equation, &parameters).filter(|nu| *nu > 0.0).map(spreading_of);
    let numbers = Numbers { courant: crossings.map(|rate| rate * step), diffusion: spreading.map(|rate| rate * step) };
    Motion { parameters, step, numbers }
}

/// The fastest signal in each direction in states of `strength`; `None` where nothing moves.
pub fn speeds(equation: &str, parameters: &Parameters, dimensions: usize, strength: f64) -> Option<Vec<f64>> {
    let one = |name: &str| parameters.get(name).map_or(0.0, |values| values[0]);
    let flow = states::LARGEST_SPEED;
    let same = |speed: f64| Some(vec![speed; dimensions]);
    match equation {
        "advection" | "advection_diffusion" => Some(parameters["velocity"].iter().map(|a| a.abs()).collect()),
        "acoustics" => {
            let flow = |axis: usize| parameters.get("velocity").map_or(0.0, |values| values[axis].abs());
            Some((0..dimensions).map(|axis| flow(axis) + one("sound_speed")).collect())
        }
        "burgers" => same(states::LARGEST_SCALAR),
        "shallow_water" => same(flow + (one("gravity") * states::largest(strength)).sqrt()),
        "euler" | "navier_stokes" => {
            same(flow + (one("gamma") * states::largest(strength) / states::smallest(strength)).sqrt())
        }
        "incompressible" => same(flow),
        _ => None,
    }
}

/// How fast the fastest-spreading quantity spreads (m^2/s).
fn diffusivity(equation: &str, parameters: &Parameters) -> Option<f64> {
    let one = |name: &str| parameters.get(name).map(|values| values[0]);
    match equation {
        "diffusion" | "advection_diffusion" => one("diffusivity"),
        "burgers" | "incompressible" => one("viscosity"),
        // Momentum along its own direction spreads with 4/3 mu / rho, heat with gamma / Pr times mu / rho.
        "navier_stokes" => {
            let factor = (4.0_f64 / 3.0).max(one("gamma")? / one("prandtl")?);
            Some(factor * one("viscosity")? / states::smallest(1.0))
        }
        _ => None,
    }
}
