use gridassay::host::*;
use gridassay_scheme::*;
use std::path::{Path, PathBuf};

#[test]
fn first() {
    gridassay::host::set_executable(Path::new(env!("CARGO_BIN_EXE_gridassay")));
    for extra in ["text", "base64"] {
        let source = SchemeSource {
            route: Route::Command(vec!["python3".into(), "tests/schemes/upwind.py".into(), extra.into()]),
            folder: PathBuf::from(env!("CARGO_MANIFEST_DIR")),
            limits: Limits::default(),
        };
        let mut session = Session::open(&source).unwrap();
        println!("{:?}", session.identity());
        let case = Case {
            equation: "advection".into(),
            dimensions: 1,
            parameters: [("velocity".to_string(), Parameter::Vector(vec![1.0]))].into(),
            coefficients: vec![],
            grid: Grid::uniform(&[8], &[0.0], &[1.0]),
            boundaries: vec![[SideKinds::Same(BoundaryKind::Periodic), SideKinds::Same(BoundaryKind::Periodic)]],
            source: false,
            steady: vec![],
            arrays: ArrayEncoding::Text,
        };
        session.prepare(&case, &mut NoCallbacks).unwrap();
        let mut state = vec![vec![1.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.1]];
        session
            .advance(
                Advance { time: 0.0, step: 0.0625, steps: 1, state: &mut state, earlier: &mut [] },
                &mut NoCallbacks,
            )
            .unwrap();
        println!("{state:?}");
        println!("{:?}", session.stderr_tail());
    }
}
