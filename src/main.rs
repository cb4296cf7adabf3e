//! The command-line program.

fn main() {
    gridassay::host::run_child_if_asked();
}
