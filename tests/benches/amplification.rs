//! What the whole amplification curve of a linear scheme costs, against one step of the scheme plus one FFT (target: at most twice), and how
//! that cost grows: n log n from 2^8 to 2^16 cells in one dimension and from 32^2 to 512^2 in two, told as cost / (n log2 n).
//!
//! `cargo bench --bench amplification`. Each figure is the least of many repetitions: the machine is shared, and noise only adds.

use std::hint::black_box;
use std::time::Instant;

use gridassay::analysis::symbol::SampledSymbol;
use gridassay::host::Session;
use gridassay::record::Parameters;
use gridassay::studies::cellwise::Cellwise;
use gridassay::studies::impulse;
use gridassay::studies::setting::{Numbers, Setting};
use gridassay_scheme::{Advance, NoCallbacks};
use num_complex::Complex64;
use rustfft::FftPlanner;

const REPETITIONS: usize = 400;

/// Seconds of the fastest repetition.
fn fastest(work: impl FnMut()) -> f64 {
    fastest_of(REPETITIONS, work)
}

fn fastest_of(repetitions: usize, mut work: impl FnMut()) -> f64 {
    let once = |work: &mut dyn FnMut()| {
        let begun = Instant::now();
        work();
        begun.elapsed().as_secs_f64()
    };
    (0..repetitions).map(|_| once(&mut work)).fold(f64::INFINITY, f64::min)
}

fn main() {
    println!(
        "{:>16} {:>6}  {:>10} {:>10} {:>10}  curve / (step + FFT)",
        "scheme", "cells", "step us", "FFT us", "curve us"
    );
    for scheme in ["lax-wendroff", "central4-rk4", "crank-nicolson-advection"] {
        for cells in [1024, 4096, 16384] {
            measure(scheme, cells);
        }
    }
    println!(
        "\n{:>16} {:>11}  {:>10} {:>10} {:>10}  transform / (n log2 n), ns",
        "scheme", "cells", "impulse us", "FFT us", "all us"
    );
    for power in [8, 10, 12, 14, 16] {
        grows("lax-wendroff", &[1 << power]);
    }
    for side in [32, 64, 128, 256, 512] {
        grows("lax-wendroff-2d", &[side, side]);
    }
}

/// The harness's own part, the transform of the responses, against n log n.
fn grows(name: &str, cells: &[usize]) {
    let mut session = Session::in_process(gridassay_classical::scheme(name).expect("a classical scheme"));
    let numbers = Numbers { courant: Some(0.4), diffusion: None };
    let setting = Setting::new(&session, "advection", &Parameters::new(), cells, numbers).expect("an offer");
    let nodes = setting.prepare(&mut session).expect("a case");
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), cells);
    let n: usize = cells.iter().product();
    let repetitions = (40_000_000 / n).clamp(5, REPETITIONS);
    let impulse = fastest_of(repetitions, || {
        black_box(impulse::responses(&mut session, &setting, &cellwise).expect("a response"));
    });
    let responses = impulse::responses(&mut session, &setting, &cellwise).expect("a response");
    let transform = fastest_of(repetitions, || {
        black_box(SampledSymbol::from_responses(&responses));
    });
    let per = 1e9 * transform / (n as f64 * (n as f64).log2());
    let shown = cells.iter().map(ToString::to_string).collect::<Vec<_>>().join(" x ");
    let all = impulse + transform;
    println!("{name:>16} {shown:>11}  {:>10.1} {:>10.1} {:>10.1}  {per:.2}", 1e6 * impulse, 1e6 * transform, 1e6 * all);
}

fn measure(name: &str, cells: usize) {
    let mut session = Session::in_process(gridassay_classical::scheme(name).expect("a classical scheme"));
    let numbers = Numbers { courant: Some(0.7), diffusion: None };
    let setting = Setting::new(&session, "advection", &Parameters::new(), &[cells], numbers).expect("an offer");
    let nodes = setting.prepare(&mut session).expect("a case");
    let cellwise = Cellwise::new(&setting.offer, nodes.as_ref(), &[cells]);
    let mut state = vec![(0..cells).map(|j| (0.01 * j as f64).sin()).collect::<Vec<f64>>()];
    let step = fastest(|| {
        let request = Advance { time: 0.0, step: setting.step, steps: 1, state: &mut state, earlier: &mut [] };
        session.advance(request, &mut NoCallbacks).expect("a step");
    });
    let fft = FftPlanner::new().plan_fft_forward(cells);
    let mut buffer = vec![Complex64::new(0.3, 0.0); cells];
    let transform = fastest(|| fft.process(black_box(&mut buffer)));
    let curve = fastest(|| {
        let responses = impulse::responses(&mut session, &setting, &cellwise).expect("a response");
        black_box(SampledSymbol::from_responses(&responses));
    });
    let ratio = curve / (step + transform);
    println!("{name:>16} {cells:>6}  {:>10.1} {:>10.1} {:>10.1}  {ratio:.2}", 1e6 * step, 1e6 * transform, 1e6 * curve);
}
