//! Standard claims on problems drawn at random: velocities of either sign, phases, wavelengths, domains, times, Courant numbers, ladders and norms.

use super::formal::{Formal, formal};
use super::standard::{Standard, order_on};

/// SplitMix64 (Steele, Lea & Flood 2014): small, seeded, the same on every machine.
pub struct Draw(u64);

impl Draw {
    pub fn seeded(seed: u64) -> Self {
        Self(seed)
    }

    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let z = (self.0 ^ (self.0 >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        let z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * (self.next() >> 11) as f64 / (1u64 << 53) as f64
    }

    fn one_of<T: Copy>(&mut self, of: &[T]) -> T {
        of[(self.next() % of.len() as u64) as usize]
    }
}

/// Four to six levels from `least` cells or up to half as many more, each finer than the one before by the same factor, rounded.
fn ladder(draw: &mut Draw, least: f64, most: f64) -> Vec<usize> {
    let ratio = draw.one_of(&[1.4, 1.5, 1.7, 2.0, 2.0]);
    let first = draw.between(least, 1.5 * least);
    let levels = (0..6).map(|level| (first * f64::powi(ratio, level)).round());
    levels.enumerate().filter(|(level, cells)| *level < 4 || *cells <= most).map(|(_, cells)| cells as usize).collect()
}

fn file(
    equation: &str,
    dimensions: usize,
    extra: &str,
    solution: &str,
    lower: f64,
    length: f64,
    times: [f64; 2],
) -> String {
    let corner = |at: f64| vec![format!("{at:.15}"); dimensions].join(", ");
    let periodic = vec!["\"periodic\""; dimensions].join(", ");
    format!(
        "name = \"drawn\"\ntitle = \"drawn\"\nreference = \"own\"\nequation = \"{equation}\"\ndimensions = {dimensions}\n{extra}\n\
         [solution]\n{solution}\n[domain]\nlower = [{}]\nupper = [{}]\nboundaries = [{periodic}]\n[time]\nstart = {}\nfinal = {}\n",
        corner(lower),
        corner(lower + length),
        times[0],
        times[1]
    )
}

/// The equation on which a scheme is tried: the first that it offers in one dimension on a periodic grid, with time.
pub fn equation_of(scheme: &str) -> Option<String> {
    use gridassay::scheme::{BoundaryKind, Operation};
    let offers = gridassay_classical::scheme(scheme)?.describe().offers;
    let fits = |offer: &&gridassay::scheme::Offer| {
        offer.dimensions == [1] && offer.has(Operation::Advance) && offer.boundaries.contains(&BoundaryKind::Periodic)
    };
    offers.iter().find(fits).map(|offer| offer.equation.clone())
}

/// A standard claim about the order of `scheme` on a problem drawn at random; `None` where it offers no periodic run in one dimension.
pub fn claim(draw: &mut Draw, scheme: &'static str) -> Option<Standard> {
    let equation = equation_of(scheme)?;
    let formal = formal(scheme);
    let (lower, length) = (draw.between(-1.0, 1.0), draw.between(0.7, 2.1));
    let start = draw.between(0.0, 0.4);
    let times = [start, start + draw.between(0.25, 0.7)];
    let wave = |draw: &mut Draw, speed: f64, waves: u32| {
        let k = std::f64::consts::TAU * f64::from(waves) / length;
        format!("sin({k:.15}*(x - ({speed:.15})*t) + {:.6})", draw.between(0.0, 6.3))
    };
    let sign = draw.one_of(&[-1.0, 1.0]);
    let speed = sign * draw.between(0.4, 1.4);
    let nu = draw.between(0.01, 0.05);
    let mean = draw.between(-1.0, 1.0);
    let second = draw.between(0.0, 0.3);
    let (extra, solution) = match equation.as_str() {
        "advection" => {
            let u = format!("{mean} + 0.8*{} + {second}*{}", wave(draw, speed, 1), wave(draw, speed, 2));
            (format!("[parameters]\nvelocity = [{speed:.15}]"), format!("u = \"{u}\""))
        }
        "diffusion" => {
            let decay = |waves: u32| nu * (std::f64::consts::TAU * f64::from(waves) / length).powi(2);
            let part = |draw: &mut Draw, waves| format!("exp(-{:.15}*t)*{}", decay(waves), wave(draw, 0.0, waves));
            let u = format!("{mean} + 0.8*{} + {second}*{}", part(draw, 1), part(draw, 2));
            (format!("[parameters]\ndiffusivity = {nu:.15}"), format!("u = \"{u}\""))
        }
        "burgers" => {
            let viscosity = if scheme.contains("central") { nu } else { 0.0 };
            let u = format!("{mean} + 0.3*{}", wave(draw, speed, 1));
            (format!("source = \"derived\"\n[parameters]\nviscosity = {viscosity}"), format!("u = \"{u}\""))
        }
        "acoustics" => {
            let (density, sound) = (draw.between(0.6, 1.9), draw.between(0.5, 1.4));
            let flow = if scheme.contains("staggered") { 0.0 } else { 0.3 * speed };
            let (with, against) = (wave(draw, flow + sound, 1), wave(draw, flow - sound, 1));
            let impedance = density * sound;
            (
                format!("[parameters]\ndensity = {density:.15}\nsound_speed = {sound:.15}\nvelocity = [{flow:.15}]"),
                format!("p = \"{with} + 0.6*{against}\"\nu = \"({with} - 0.6*{against})/{impedance:.15}\""),
            )
        }
        "euler" => {
            let gamma = draw.between(1.2, 1.7);
            (
                format!("source = \"derived\"\n[parameters]\ngamma = {gamma}"),
                format!(
                    "density = \"1.2 + 0.2*{}\"\nvelocity_x = \"{mean} + 0.2*{}\"\npressure = \"1.1 + 0.3*{}\"",
                    wave(draw, speed, 1),
                    wave(draw, speed, 1),
                    wave(draw, -speed, 1)
                ),
            )
        }
        _ => return None,
    };
    let own = file(&equation, 1, &extra, &solution, lower, length, times);
    Some(order_on(&format!("{scheme}: {own}"), &own, &rest(draw, &formal, &equation)))
}

/// Ladder, step, norm and claim.
fn rest(draw: &mut Draw, formal: &Formal, equation: &str) -> String {
    let expect = if formal.lines { formal.space } else { formal.space.min(formal.time) };
    let least = match expect {
        _ if formal.name.starts_with("dg-") => 10.0,
        e if e < 1.5 => 100.0,
        e if e < 4.5 => 30.0,
        _ => 24.0,
    };
    let cells = ladder(draw, least, if expect < 1.5 { 1200.0 } else { 250.0 });
    let norm = if formal.limited { "l1" } else { draw.one_of(&["l1", "l2", "linf"]) };
    let tolerance = if formal.limited { 0.25 } else { 0.1 };
    let step = match equation {
        "diffusion" => format!("diffusion_number = {:.6}", draw.between(0.1, 0.24)),
        _ if formal.name.starts_with("dg-") => format!("courant = {:.6}", draw.between(0.05, 0.13)),
        _ => format!("courant = {:.6}", draw.between(0.25, 0.9)),
    };
    let refine = match (formal.lines && expect > 1.5, equation) {
        (true, _) => format!("refine = \"space\"\ntime_order = {}\n", formal.time),
        _ => String::new(),
    };
    format!("cells = {cells:?}\n{step}\nnorm = \"{norm}\"\nexpect = {expect}\ntolerance = {tolerance}\n{refine}")
}
