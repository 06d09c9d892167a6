//! *Tails*: the two probabilities that a value cuts a distribution into.

/// The lower and the upper tail of a continuous distribution at one value. What is kept is the logarithm of
/// the tail that was computed as such, which is the smaller one; the other follows from it without loss.
/// So a tiny tail keeps its digits on either side, and its logarithm stays finite where the tail itself
/// is too small for a double.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tails {
    ln_known: f64,
    known: Side,
}

#[derive(Clone, Copy, Debug, PartialEq)]
enum Side {
    Lower,
    Upper,
}

impl Tails {
    /// Nothing below: the value is at or before the beginning of the distribution.
    pub(super) const AT_BEGINNING: Tails = Tails {
        ln_known: f64::NEG_INFINITY,
        known: Side::Lower,
    };

    /// Nothing above.
    pub(super) const AT_END: Tails = Tails {
        ln_known: f64::NEG_INFINITY,
        known: Side::Upper,
    };

    pub(super) fn from_ln_lower(ln: f64) -> Tails {
        Tails {
            ln_known: ln.min(0.0),
            known: Side::Lower,
        }
    }

    pub(super) fn from_ln_upper(ln: f64) -> Tails {
        Tails {
            ln_known: ln.min(0.0),
            known: Side::Upper,
        }
    }

    /// The tails of the mirrored distribution at the mirrored value.
    pub(super) fn mirrored(self) -> Tails {
        Tails {
            known: match self.known {
                Side::Lower => Side::Upper,
                Side::Upper => Side::Lower,
            },
            ..self
        }
    }

    fn of(self, side: Side) -> f64 {
        if self.known == side {
            self.ln_known.exp()
        } else {
            self.ln_known.exp_m1().abs()
        }
    }

    fn ln_of(self, side: Side) -> f64 {
        if self.known == side {
            self.ln_known
        } else {
            ln_of_rest(self.ln_known)
        }
    }

    /// The probability of a smaller value.
    pub fn lower(self) -> f64 {
        self.of(Side::Lower)
    }

    /// The probability of a larger value.
    pub fn upper(self) -> f64 {
        self.of(Side::Upper)
    }

    /// Natural logarithm of [`lower`](Tails::lower); −∞ where nothing lies below.
    pub fn ln_lower(self) -> f64 {
        self.ln_of(Side::Lower)
    }

    /// Natural logarithm of [`upper`](Tails::upper); −∞ where nothing lies above.
    pub fn ln_upper(self) -> f64 {
        self.ln_of(Side::Upper)
    }
}

/// ln(1 − e^ln) for ln ≤ 0, by whichever of two ways keeps the digits.
pub(super) fn ln_of_rest(ln: f64) -> f64 {
    if ln > -std::f64::consts::LN_2 {
        (-ln.exp_m1()).ln()
    } else {
        (-ln.exp()).ln_1p()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_other_tail_keeps_its_digits() {
        let far = Tails::from_ln_upper(-800.0);
        assert_eq!((far.upper(), far.lower()), (0.0, 1.0));
        assert_eq!(far.ln_upper(), -800.0);
        let near = Tails::from_ln_lower(-1e-20);
        assert_eq!((near.upper(), near.lower()), (1e-20, 1.0));
        assert!((near.ln_upper() - 1e-20f64.ln()).abs() < 1e-13);
        assert_eq!(Tails::AT_BEGINNING.mirrored(), Tails::AT_END);
        assert_eq!((Tails::AT_END.ln_lower(), Tails::AT_END.lower()), (0.0, 1.0));
    }
}
