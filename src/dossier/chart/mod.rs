//! Charts as data: what a figure shows, apart from how it is drawn.
//!
//! One model feeds the drawn figure and the page's script, so that both show the same numbers.

mod axis;
mod canvas;
mod compared;
mod convergence;
mod draw;
mod modes;
mod polar;
mod stable_range;

use serde::Serialize;

use crate::record::{ModesRecord, Results, Study};

pub(crate) use draw::{Size, svg, themed};

/// A chart.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Chart {
    /// File stem and anchor.
    pub id: String,
    /// What it shows, in a line.
    pub title: String,
    /// What it shows, in a sentence or two for people who do not see it.
    pub description: String,
    pub x: Axis,
    pub y: Axis,
    pub series: Vec<Series>,
    /// Straight lines across the chart: a limit, the value one.
    pub marks: Vec<Mark>,
    /// Shaded ranges of x.
    pub bands: Vec<[f64; 2]>,
}

/// An axis.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Axis {
    pub label: String,
    /// Short name for read-outs.
    pub symbol: String,
    pub scale: Scale,
    pub range: [f64; 2],
    pub ticks: Ticks,
}

/// How values are laid along an axis.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Scale {
    Linear,
    Log,
}

/// What ticks are labelled with.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Ticks {
    Numbers,
    /// Fractions of pi.
    Pi,
}

/// What a series is, which decides how it is drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Role {
    /// Measured: a line with markers.
    Measured,
    /// The exact curve: a plain line.
    Exact,
    /// A guide to the eye: a dashed line.
    Guide,
}

/// A curve.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Series {
    pub name: String,
    pub role: Role,
    /// Which colour and marker.
    pub slot: usize,
    pub points: Vec<[f64; 2]>,
}

/// A straight line across the chart.
#[derive(Clone, Debug, Serialize)]
pub(crate) struct Mark {
    pub axis: Across,
    pub value: f64,
    pub label: String,
}

/// Which axis a mark's value belongs to.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub(crate) enum Across {
    X,
    Y,
}

/// The charts of every study, study by study.
pub(crate) fn of_studies(results: &Results, ids: &[String]) -> Vec<Vec<Chart>> {
    let each = results.studies.iter().zip(ids);
    each.map(|(study, id)| match &study.study {
        Study::Modes(record) => [modes::charts(id, record), polar::charts(id, record)].concat(),
        Study::Order(record) => convergence::charts(id, record, results, &study.id),
        Study::Invariants(_) | Study::Uncertainty(_) | Study::Operator(_) => Vec::new(),
        Study::Stability(record) => stable_range::charts(id, record, results, &study.id),
    })
    .collect()
}

/// The charts of one Fourier study, for outputs that draw them in their own way.
pub(crate) fn modes_charts(record: &ModesRecord) -> Vec<Chart> {
    modes::charts("", record)
}

/// The charts in which several schemes are compared.
pub(crate) fn of_schemes(results: &Results) -> Vec<Chart> {
    compared::charts(results)
}

/// At most `most` of `items`, evenly chosen, with the first and the last: a chart needs no more points than pixels.
pub(crate) fn thin<T: Clone>(items: &[T], most: usize) -> Vec<T> {
    if items.len() <= most || most < 2 {
        return items.to_vec();
    }
    let last = items.len() - 1;
    (0..most).map(|i| items[i * last / (most - 1)].clone()).collect()
}

#[cfg(test)]
mod tests {
    use super::thin;

    #[test]
    fn thinning_keeps_both_ends_and_the_order() {
        let thinned = thin(&(0..1000).collect::<Vec<_>>(), 7);
        assert_eq!((thinned.first(), thinned.last(), thinned.len()), (Some(&0), Some(&999), 7));
        assert!(thinned.windows(2).all(|pair| pair[0] < pair[1]));
        assert_eq!(thin(&[1, 2], 7), [1, 2]);
    }
}
