//! What the distributions are held to: values with many digits, printed tables, other programs, each other, and any
//! arguments at all.

mod any;
mod each_other;
mod illegal;
mod programs;
mod reference;
mod tables;

/// Whether a value is there and right up to a relative error.
#[track_caller]
fn close(got: Option<f64>, expected: f64, error: f64) {
    let got = got.expect("legal arguments have a value");
    assert!(
        (got / expected - 1.0).abs() <= error,
        "{got:e} is not {expected:e}"
    );
}
