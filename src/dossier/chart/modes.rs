//! Charts of a Fourier study: modulus of the amplification factor, and phase-speed ratio, over the wavenumber.

use super::axis::linear_range;
use super::{Across, Axis, Chart, Mark, Role, Scale, Series, Ticks, thin};
use crate::dossier::clean::visible;
use crate::record::{ModeRecord, ModesRecord, SemiDiscrete};

/// Most points in one curve of a chart.
const POINTS: usize = 193;

pub(super) fn charts(id: &str, record: &ModesRecord) -> Vec<Chart> {
    let curves = curves(&record.modes);
    let mut charts = Vec::new();
    if !curves.is_empty() {
        charts.push(amplification(id, &curves));
        charts.extend(phase_speed(id, &curves));
    }
    charts.extend(record.semi_discrete.as_ref().and_then(|found| modified_wavenumber(id, found)));
    charts
}

/// Real and imaginary part of the modified wavenumber over the wavenumber, with the line on which a scheme without error lies.
fn modified_wavenumber(id: &str, found: &SemiDiscrete) -> Option<Chart> {
    let part = |index: usize| -> Vec<[f64; 2]> {
        let of = found.modes.iter().filter(|mode| mode.theta >= 0.0);
        of.filter_map(|mode| Some([mode.theta, mode.modified_wavenumber?[index]])).collect()
    };
    let mut series = Vec::new();
    let line = vec![[0.0, 0.0], [std::f64::consts::PI, std::f64::consts::PI]];
    push(&mut series, "no error".into(), Role::Exact, 0, line);
    push(&mut series, "real part (phase)".into(), Role::Measured, 0, part(0));
    push(&mut series, "imaginary part (damping)".into(), Role::Measured, 1, part(1));
    if series.len() < 3 {
        return None;
    }
    let values = series.iter().flat_map(|series| &series.points).map(|point| point[1].clamp(-4.0, 4.0));
    let range = linear_range(values, 0.04, [-1.0, 3.2]);
    Some(Chart {
        id: format!("{id}-modified-wavenumber"),
        title: "Modified wavenumber of the rate".into(),
        description: "Real and imaginary part of the modified wavenumber over the wavenumber; without error the real part is the \
                      wavenumber itself and the imaginary part is zero."
            .into(),
        x: theta_axis(&[]),
        y: Axis {
            label: "modified wavenumber k′ h".into(),
            symbol: "k′h".into(),
            scale: Scale::Linear,
            range,
            ticks: Ticks::Numbers,
        },
        series,
        marks: vec![Mark { axis: Across::Y, value: 0.0, label: String::new() }],
        bands: Vec::new(),
    })
}

/// The modes of one branch in one direction, ascending in theta.
pub(super) struct Curve<'a> {
    pub name: String,
    pub modes: Vec<(f64, &'a ModeRecord)>,
}

/// One curve a branch; in two and three dimensions one a branch and a direction (along each axis, and along the diagonal).
pub(super) fn curves(modes: &[ModeRecord]) -> Vec<Curve<'_>> {
    let mut branches: Vec<&str> = Vec::new();
    for mode in modes {
        if !branches.contains(&mode.branch.as_str()) {
            branches.push(&mode.branch);
        }
    }
    let dimensions = modes.first().map_or(0, |mode| mode.theta.len());
    let directions: &[&str] = match dimensions {
        0 | 1 => &[""],
        2 => &["along x", "along y", "diagonal"],
        _ => &["along x", "along y", "along z", "diagonal"],
    };
    let mut curves = Vec::new();
    for branch in &branches {
        for (index, direction) in directions.iter().enumerate() {
            let of_branch = modes.iter().filter(|mode| mode.branch == *branch);
            let along = of_branch.filter_map(|mode| Some((along(&mode.theta, index, dimensions)?, mode)));
            let modes = half(along.collect());
            if modes.is_empty() {
                continue;
            }
            let words = [if branches.len() > 1 { *branch } else { "" }, direction];
            let words: Vec<&str> = words.into_iter().filter(|word| !word.is_empty()).collect();
            let name = if words.is_empty() { "measured".into() } else { visible(&words.join(", ")) };
            curves.push(Curve { name, modes });
        }
    }
    curves
}

/// The coordinate of `theta` along a direction, where it lies on it.
fn along(theta: &[f64], direction: usize, dimensions: usize) -> Option<f64> {
    if dimensions <= 1 {
        return theta.first().copied();
    }
    if direction < dimensions {
        let others_vanish = theta.iter().enumerate().all(|(axis, &value)| axis == direction || value == 0.0);
        return others_vanish.then(|| theta[direction]);
    }
    theta.iter().all(|&value| (value - theta[0]).abs() <= 1e-12).then(|| theta[0])
}

/// Half of the wavenumbers where the other half mirrors them, as for every scheme with real coefficients.
fn half(mut modes: Vec<(f64, &ModeRecord)>) -> Vec<(f64, &ModeRecord)> {
    modes.sort_by(|a, b| a.0.total_cmp(&b.0));
    let mirrored = modes.iter().filter(|(theta, _)| *theta < 0.0).all(|(theta, mode)| {
        let partner = modes.iter().find(|(other, _)| (other + theta).abs() < 1e-9);
        partner.is_none_or(|(_, partner)| (partner.modulus - mode.modulus).abs() <= 1e-9 * (1.0 + mode.modulus))
    });
    if mirrored && modes.iter().any(|(theta, _)| *theta > 0.0) {
        modes.retain(|(theta, _)| *theta >= 0.0);
    }
    modes
}

pub(super) fn amplification(id: &str, curves: &[Curve<'_>]) -> Chart {
    let mut series = Vec::new();
    for (slot, curve) in curves.iter().enumerate() {
        let exact = curve.modes.iter().filter_map(|(theta, mode)| Some([*theta, mode.exact_modulus?]));
        push(&mut series, exact_name(curves, curve), Role::Exact, slot, exact.collect());
        let measured = curve.modes.iter().map(|(theta, mode)| [*theta, mode.modulus]);
        push(&mut series, curve.name.clone(), Role::Measured, slot, measured.collect());
    }
    // Where an exact curve is drawn, a line at one would only lie on it.
    let line_at_one = Mark { axis: Across::Y, value: 1.0, label: String::new() };
    let marks = if series.iter().any(|series| series.role == Role::Exact) { Vec::new() } else { vec![line_at_one] };
    let highest = series.iter().flat_map(|series| &series.points).map(|point| point[1]).fold(1.0, f64::max);
    Chart {
        id: format!("{id}-amplification"),
        title: "Modulus of the amplification factor".into(),
        description: "Modulus of the amplification factor in one step over the wavenumber, measured and exact.".into(),
        x: theta_axis(curves),
        y: Axis {
            label: "|G| in one step".into(),
            symbol: "|G|".into(),
            scale: Scale::Linear,
            range: [0.0, if highest > 1.0 + 1e-9 { highest.min(4.0) * 1.05 } else { 1.05 }],
            ticks: Ticks::Numbers,
        },
        series,
        marks,
        bands: Vec::new(),
    }
}

pub(super) fn phase_speed(id: &str, curves: &[Curve<'_>]) -> Option<Chart> {
    let mut series = Vec::new();
    for (slot, curve) in curves.iter().enumerate() {
        let ratio = curve.modes.iter().filter_map(|(theta, mode)| Some([*theta, mode.phase_speed_ratio?]));
        push(&mut series, curve.name.clone(), Role::Measured, slot, ratio.collect());
    }
    if series.is_empty() {
        return None;
    }
    let values = series.iter().flat_map(|series| &series.points).map(|point| point[1].clamp(-1.0, 2.5));
    let range = linear_range(values.chain([1.0]), 0.06, [0.0, 1.2]);
    // A nearly exact scheme must not look wild: at least a tenth on either side of one.
    let range = [range[0].min(0.9), range[1].max(1.1)];
    Some(Chart {
        id: format!("{id}-phase-speed"),
        title: "Phase speed, numerical over exact".into(),
        description: "Numerical phase speed divided by the exact one over the wavenumber; the exact ratio is one."
            .into(),
        x: theta_axis(curves),
        y: Axis {
            label: "phase speed / exact phase speed".into(),
            symbol: "c/c exact".into(),
            scale: Scale::Linear,
            range,
            ticks: Ticks::Numbers,
        },
        series,
        marks: vec![Mark { axis: Across::Y, value: 1.0, label: "exact".into() }],
        bands: Vec::new(),
    })
}

fn exact_name(curves: &[Curve<'_>], curve: &Curve<'_>) -> String {
    if curves.len() > 1 { format!("exact, {}", curve.name) } else { "exact".into() }
}

fn push(series: &mut Vec<Series>, name: String, role: Role, slot: usize, points: Vec<[f64; 2]>) {
    let points: Vec<_> = points.into_iter().filter(|point| point.iter().all(|value| value.is_finite())).collect();
    // Several branches often share one exact curve: it is drawn once.
    let repeated = role == Role::Exact && series.iter().any(|other| other.role == role && other.points == points);
    if !points.is_empty() && !repeated {
        series.push(Series { name, role, slot, points: thin(&points, POINTS) });
    }
}

fn theta_axis(curves: &[Curve<'_>]) -> Axis {
    let lowest = curves.iter().filter_map(|curve| Some(curve.modes.first()?.0)).fold(0.0, f64::min);
    Axis {
        label: "wavenumber θ = k h".into(),
        symbol: "θ".into(),
        scale: Scale::Linear,
        range: [if lowest < 0.0 { -std::f64::consts::PI } else { 0.0 }, std::f64::consts::PI],
        ticks: Ticks::Pi,
    }
}
