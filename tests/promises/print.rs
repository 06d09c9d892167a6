//! Printing numbers as authors and their programs do.

/// Where a number half-way between two printed ones goes.
#[derive(Clone, Copy, Debug)]
pub enum Rounding {
    Up,
    Even,
    Down,
}

/// `value` with so many decimals. Ties are recognised in the decimal digits that the value shows
/// with twelve more decimals, as a person or a spreadsheet would see them.
pub fn fixed(value: f64, decimals: usize, rounding: Rounding) -> String {
    let long = format!("{:.*}", decimals + 12, value.abs());
    let (kept, rest) = long.split_at(long.len() - 12);
    let tie = rest.starts_with('5') && rest[1..].bytes().all(|b| b == b'0');
    let digits: String = kept.chars().filter(char::is_ascii_digit).collect();
    let mut whole: u128 = digits.parse().expect("digits only");
    let up = match rounding {
        Rounding::Up => rest.as_bytes()[0] >= b'5',
        Rounding::Even if tie => whole % 2 == 1,
        Rounding::Down if tie => false,
        _ => rest.as_bytes()[0] >= b'5',
    };
    whole += u128::from(up);
    let sign = if value < 0.0 && whole > 0 { "-" } else { "" };
    if decimals == 0 {
        return format!("{sign}{whole}");
    }
    let padded = format!("{whole:0>width$}", width = decimals + 1);
    let (a, b) = padded.split_at(padded.len() - decimals);
    format!("{sign}{a}.{b}")
}

#[test]
fn ties_go_where_they_should() {
    assert_eq!(fixed(3.125, 2, Rounding::Up), "3.13");
    assert_eq!(fixed(3.125, 2, Rounding::Even), "3.12");
    assert_eq!(fixed(3.135, 2, Rounding::Even), "3.14");
    assert_eq!(fixed(3.135, 2, Rounding::Down), "3.13");
    assert_eq!(fixed(-0.0004, 2, Rounding::Up), "0.00");
    assert_eq!(fixed(9.996, 2, Rounding::Up), "10.00");
    assert_eq!(fixed(17.5, 0, Rounding::Even), "18");
}
