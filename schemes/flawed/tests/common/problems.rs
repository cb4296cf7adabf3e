//! The problems that go with an offer.

use gridassay_scheme::{
    BoundaryKind, Case, Fields, Grid, NoCallbacks, Offer, Operation, Parameter, Position, Scheme, SideKinds, Values,
};

use super::solutions::{Solution, SolutionHarness};

/// A case with its exact solution.
#[derive(Clone, Debug)]
pub struct Problem {
    pub offer: Offer,
    pub case: Case,
    pub solution: Solution,
    /// When the run ends.
    pub end: f64,
    /// Steps on this grid: the finest stable and sensible choice, the step falling with the width or its square.
    pub steps: usize,
    pub steady: bool,
}

const LENGTHS: [f64; 2] = [1.7, 0.9];

fn case(equation: &str, cells: &[usize], parameters: &[(&str, Parameter)], kinds: [BoundaryKind; 2]) -> Case {
    let dimensions = cells.len();
    Case {
        equation: equation.to_owned(),
        dimensions,
        parameters: parameters.iter().map(|(name, value)| ((*name).to_owned(), value.clone())).collect(),
        coefficients: Vec::new(),
        grid: Grid::uniform(cells, &[0.3, -0.2][..dimensions], &[2.0, 0.7][..dimensions]),
        boundaries: vec![kinds.map(SideKinds::Same); dimensions],
        source: false,
        steady: Vec::new(),
        arrays: Default::default(),
    }
}

fn number(value: f64) -> Parameter {
    Parameter::Scalar(value)
}

const PERIODIC: [BoundaryKind; 2] = [BoundaryKind::Periodic; 2];

/// Every problem of the offer with `cells` cells in x.
pub fn problems(name: &str, offer: &Offer, cells: usize) -> Vec<Problem> {
    let mut all = Vec::new();
    let h = LENGTHS[0] / cells as f64;
    let implicit = name.contains("crank-nicolson") || name.contains("implicit");
    let mut add = |case: Case, solution: Solution, end: f64, step: f64| {
        let steady = !offer.has(Operation::Advance);
        all.push(Problem { offer: offer.clone(), case, solution, end, steps: (end / step).ceil() as usize, steady });
    };
    match offer.equation.as_str() {
        _ if !offer.has(Operation::Advance) => {
            use BoundaryKind::{Gradient, Value};
            for kinds in [[Value, Value], [Gradient, Value], [Value, Gradient]] {
                if !kinds.iter().all(|kind| offer.boundaries.contains(kind)) {
                    continue;
                }
                let (velocity, diffusivity) =
                    if offer.equation == "advection_diffusion" { (0.8, 0.6) } else { (0.0, 0.6) };
                let parameters =
                    [("velocity", number(velocity)), ("diffusivity", number(0.6)), ("conductivity", number(0.6))];
                let mut case = case(&offer.equation, &[cells], &parameters, kinds);
                case.source = true;
                let solution = Solution::Manufactured { velocity, diffusivity, burgers: false, steady: true };
                add(case, solution, 1.0, 1.0);
            }
        }
        "advection" if offer.dimensions == [2] => {
            for velocity in [[1.1, 0.6], [-1.1, 0.6], [1.1, -0.6], [-1.1, -0.6]] {
                let case = case(
                    "advection",
                    &[cells, cells / 2],
                    &[("velocity", Parameter::Vector(velocity.to_vec()))],
                    PERIODIC,
                );
                add(case, Solution::PlaneWave { velocity, lengths: LENGTHS }, 0.5, 0.2 * h / 1.1);
            }
        }
        "advection" => {
            for velocity in [1.1, -1.1] {
                let case = case("advection", &[cells], &[("velocity", number(velocity))], PERIODIC);
                let courant = if offer.values == Values::CellNodes { 0.1 } else { 0.45 };
                // Fifth order in space needs a step that falls faster than the width.
                let step = if name.contains('5') { 0.4 * h.powf(5.0 / 3.0) } else { courant * h / 1.1 };
                add(case, Solution::Wave { velocity, diffusivity: 0.0, length: LENGTHS[0] }, 1.3, step);
            }
        }
        "diffusion" if offer.dimensions == [2] => {
            let mut case = case("diffusion", &[cells, cells / 2], &[("diffusivity", number(0.3))], PERIODIC);
            case.source = true;
            let width = LENGTHS[1] / (cells / 2) as f64;
            add(
                case,
                Solution::PlaneManufactured { diffusivity: 0.3, lengths: LENGTHS },
                0.4,
                0.2 * width.min(h).powi(2) / 0.3,
            );
        }
        "diffusion" | "advection_diffusion" | "burgers"
            if offer.source && offer.boundaries.contains(&BoundaryKind::Value) =>
        {
            use BoundaryKind::{Gradient, Value};
            let burgers = offer.equation == "burgers";
            let velocity = if offer.equation == "advection_diffusion" { 0.8 } else { 0.0 };
            for kinds in [[Value, Value], [Gradient, Value], [Value, Gradient]] {
                if !kinds.iter().all(|kind| offer.boundaries.contains(kind)) {
                    continue;
                }
                let nu = match offer.equation.as_str() {
                    "diffusion" => 0.4,
                    "burgers" => 0.1,
                    // Little diffusion, so that the step may fall with the width and the time error is seen.
                    _ => 1e-3,
                };
                let parameters =
                    [("velocity", number(velocity)), ("diffusivity", number(nu)), ("viscosity", number(nu))];
                let mut case = case(&offer.equation, &[cells], &parameters, kinds);
                case.source = true;
                let advective = match offer.equation.as_str() {
                    "diffusion" => h,
                    "burgers" => 0.4 * h,
                    _ => 0.8 * h,
                };
                let step = if implicit { 0.5 * h } else { advective.min(0.25 * h * h / nu) };
                add(case, Solution::Manufactured { velocity, diffusivity: nu, burgers, steady: false }, 0.6, step);
            }
        }
        "burgers" => {
            let parameters = [("viscosity", number(0.0))];
            let of = || case("burgers", &[cells], &parameters, PERIODIC);
            add(of(), Solution::BurgersWave { length: LENGTHS[0] }, 0.25, 0.25 * h);
            add(of(), Solution::BurgersJumps, 0.2, 0.2 * h);
        }
        "diffusion" | "advection_diffusion" => {
            let velocity = if offer.equation == "diffusion" { 0.0 } else { 0.8 };
            let nu = 0.02;
            let parameters = [("velocity", number(velocity)), ("diffusivity", number(nu))];
            let case = case(&offer.equation, &[cells], &parameters, PERIODIC);
            let step = (0.2 * h * h / nu).min(0.4 * h);
            add(case, Solution::Wave { velocity, diffusivity: nu, length: LENGTHS[0] }, 0.7, step);
        }
        "acoustics" => {
            let (density, sound_speed) = (1.3, 0.7);
            let flow = offer.parameters.contains_key("velocity");
            let velocity = if flow { 0.0 } else { 0.3 };
            let parameters =
                [("density", number(density)), ("sound_speed", number(sound_speed)), ("velocity", number(velocity))];
            let case = case("acoustics", &[cells], &parameters, PERIODIC);
            add(case, Solution::Sound { density, sound_speed, velocity, length: LENGTHS[0] }, 1.3, 0.45 * h);
        }
        "euler" => {
            let case = case("euler", &[cells], &[("gamma", number(1.3))], PERIODIC);
            add(case, Solution::SimpleWave { gamma: 1.3, length: LENGTHS[0] }, 0.1, 0.2 * h);
        }
        other => panic!("no problem for {other}"),
    }
    all
}

impl Problem {
    fn is_periodic(&self) -> bool {
        self.case.is_periodic(0)
    }

    /// Coordinates of a field's values.
    fn positions(&self, field: &str, scheme: &mut dyn Scheme) -> Vec<[f64; 2]> {
        let grid = &self.case.grid;
        let axis = |axis: usize| match (self.offer.values, self.offer.placement.of(field)) {
            (Values::Point | Values::CellAverage, Position::Centre) => grid.centres(axis),
            (Values::Point, Position::Node | Position::XFace) => grid.nodes(axis, 1, self.is_periodic()),
            (Values::CellNodes, _) => Vec::new(),
            other => panic!("no positions for {other:?}"),
        };
        let x = if self.offer.values == Values::CellNodes {
            let nodes =
                scheme.prepare(&self.case, &mut NoCallbacks).expect("within the offers").expect("nodes of a cell");
            grid.cell_nodes(0, &nodes)
        } else {
            axis(0)
        };
        let y = if grid.dimensions() == 2 { axis(1) } else { vec![0.0] };
        y.iter().flat_map(|y| x.iter().map(move |x| [*x, *y])).collect()
    }

    /// The exact state at `time`, as the offer's values and time offsets say.
    pub fn state_at(&self, time: f64, scheme: &mut dyn Scheme, step: f64) -> Fields {
        let names = self.offer.fields.clone().unwrap_or_else(|| vec!["u".to_owned()]);
        let h = self.case.grid.spacing(0);
        let field = |(f, name): (usize, &String)| -> Vec<f64> {
            let time = time + self.offer.time_offset.get(name).copied().unwrap_or(0.0) * step;
            let at = |[x, y]: [f64; 2]| self.solution.at([x, y], time)[f];
            // Simpson's rule for the averages: an error of fourth order, above that of the schemes tried on them.
            let value = |[x, y]: [f64; 2]| match self.offer.values {
                Values::CellAverage => (at([x - 0.5 * h, y]) + 4.0 * at([x, y]) + at([x + 0.5 * h, y])) / 6.0,
                _ => at([x, y]),
            };
            self.positions(name, scheme).into_iter().map(value).collect()
        };
        names.iter().enumerate().map(field).collect()
    }

    /// The harness that answers for this problem.
    pub fn harness(&self, scheme: &mut dyn Scheme) -> SolutionHarness {
        let positions = self.positions("u", scheme);
        let ends = [self.case.grid.lower[0], self.case.grid.upper[0]];
        SolutionHarness { solution: self.solution, positions, ends }
    }
}
