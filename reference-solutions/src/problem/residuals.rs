//! The equations written out once more, as texts in conserved fields, for the check of solutions.
//!
//! Source terms are derived from `crate::equation`. Here the same equations stand apart from it and in another way, so
//! that a slip in one of the two is seen.

use crate::expression::{Expression, Scope};

use super::error::AXES;

/// The names that residuals may use.
pub(super) fn scope(fields: &[String], parameters: &[String], dimensions: usize) -> Scope {
    let coordinates = AXES[..dimensions].iter().copied().chain(["t"]);
    let mut scope = Scope::new(coordinates.clone());
    fields.iter().chain(parameters).for_each(|name| scope.declare(name));
    scope.with_derivatives(coordinates)
}

/// Residuals by field, with `d(...)` open, of a known equation.
pub(super) fn residuals(equation: &str, scope: &Scope, dimensions: usize) -> Result<Vec<Expression>, String> {
    let unknown = || format!("the check knows no residual of {equation}: it must be added to the program");
    let texts = texts(equation, &AXES[..dimensions]).ok_or_else(unknown)?;
    texts.iter().map(|text| Expression::parse(text, scope).map_err(|error| error.to_string())).collect()
}

/// A sum over the coordinates.
fn sum(axes: &[&str], term: impl Fn(&str) -> String) -> String {
    format!("({})", axes.iter().map(|axis| term(axis)).collect::<Vec<_>>().join(" + "))
}

fn texts(equation: &str, axes: &[&str]) -> Option<Vec<String>> {
    let carried = sum(axes, |x| format!("velocity_{x}*d(u,{x})"));
    let spread = |coefficient: &str| sum(axes, |x| format!("d({coefficient}*d(u,{x}),{x})"));
    Some(match equation {
        "advection" => vec![format!("d(u,t) + {carried}")],
        "diffusion" => vec![format!("d(u,t) - {}", spread("diffusivity"))],
        "advection_diffusion" => vec![format!("d(u,t) + {carried} - {}", spread("diffusivity"))],
        "dispersion" => vec!["d(u,t) + dispersion*d(u,x,x,x)".to_string()],
        "burgers" => vec![format!("d(u,t) + {} - {}", sum(axes, |x| format!("u*d(u,{x})")), spread("viscosity"))],
        "poisson" => vec![format!("-{}", spread("conductivity"))],
        "acoustics" => acoustics(axes),
        "shallow_water" => shallow_water(axes),
        "incompressible" => incompressible(axes),
        "euler" => gas(axes, false),
        "navier_stokes" => gas(axes, true),
        _ => return None,
    })
}

/// The velocity component along each axis, for equations whose fields are called u, v, w.
fn components<'a>(axes: &'a [&'a str]) -> impl Iterator<Item = (&'static str, &'a str)> + Clone {
    ["u", "v", "w"].into_iter().zip(axes.iter().copied())
}

fn divergence(axes: &[&str]) -> String {
    components(axes).map(|(u, x)| format!("d({u},{x})")).collect::<Vec<_>>().join(" + ")
}

fn acoustics(axes: &[&str]) -> Vec<String> {
    let carried = |field: &str| format!("d({field},t) + {}", sum(axes, |x| format!("velocity_{x}*d({field},{x})")));
    let pressure = format!("{} + density*sound_speed^2*({})", carried("p"), divergence(axes));
    let momentum = components(axes).map(|(u, x)| format!("{} + d(p,{x})/density", carried(u)));
    std::iter::once(pressure).chain(momentum).collect()
}

fn incompressible(axes: &[&str]) -> Vec<String> {
    let momentum = components(axes).map(|(u, x)| {
        let inertia = components(axes).map(|(v, y)| format!("{v}*d({u},{y})")).collect::<Vec<_>>().join(" + ");
        format!("d({u},t) + {inertia} + d(p,{x}) - {}", sum(axes, |y| format!("d(viscosity*d({u},{y}),{y})")))
    });
    momentum.chain([divergence(axes)]).collect()
}

fn shallow_water(axes: &[&str]) -> Vec<String> {
    let mass = format!("d(depth,t) + {}", sum(axes, |x| format!("d(discharge_{x},{x})")));
    let momentum = axes.iter().map(|x| {
        let flux = sum(axes, |y| format!("d(discharge_{x}*discharge_{y}/depth,{y})"));
        format!("d(discharge_{x},t) + {flux} + gravity*depth*d(depth + bed,{x})")
    });
    std::iter::once(mass).chain(momentum).collect()
}

/// Euler, or with stresses and heat conduction Navier-Stokes.
fn gas(axes: &[&str], viscous: bool) -> Vec<String> {
    let velocity = |x: &str| format!("(momentum_{x}/density)");
    let kinetic = sum(axes, |x| format!("momentum_{x}^2/(2*density)"));
    let pressure = format!("((gamma - 1)*(energy - {kinetic}))");
    let dilation = sum(axes, |x| format!("d({},{x})", velocity(x)));
    let stress = |x: &str, y: &str| {
        let isotropic = if x == y { format!(" - 2/3*{dilation}") } else { String::new() };
        format!("(viscosity*(d({},{y}) + d({},{x}){isotropic}))", velocity(x), velocity(y))
    };
    let heat = |x: &str| {
        let conductivity = "viscosity*gamma*gas_constant/((gamma - 1)*prandtl)";
        format!("{conductivity}*d({pressure}/(density*gas_constant),{x})")
    };
    let mass = format!("d(density,t) + {}", sum(axes, |x| format!("d(momentum_{x},{x})")));
    let momentum = axes.iter().map(|x| {
        let flux = sum(axes, |y| format!("d(momentum_{x}*momentum_{y}/density,{y})"));
        let force = if viscous { sum(axes, |y| format!("d({},{y})", stress(x, y))) } else { "0".into() };
        format!("d(momentum_{x},t) + {flux} + d({pressure},{x}) - {force}")
    });
    let flux = sum(axes, |x| format!("d((energy + {pressure})*{},{x})", velocity(x)));
    let work = |x: &str| sum(axes, |y| format!("{}*{}", velocity(y), stress(x, y)));
    let gain = if viscous { sum(axes, |x| format!("d({} + {},{x})", work(x), heat(x))) } else { "0".into() };
    let energy = format!("d(energy,t) + {flux} - {gain}");
    std::iter::once(mass).chain(momentum).chain([energy]).collect()
}
