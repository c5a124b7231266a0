//! Exact decimal numbers: what a person types, before it becomes a binary number.
//!
//! Units that are powers of ten shift the decimal exponent, so "2874.2 MeV" and "2.8742 GeV"
//! are the same bits; the one rounding is the correctly rounded one of the standard library.

/// A decimal number: sign, digits, exponent of ten of the last digit.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Decimal {
    negative: bool,
    digits: String,
    exponent: i64,
}

/// Exponents beyond this cannot be a finite number of any unit.
const EXPONENT_LIMIT: i64 = 100_000;

impl Decimal {
    /// Reads a number at the start of `text`; answers with what is left after it.
    /// Accepts a sign, digits with one point, and an exponent; `None` if there is no number.
    #[must_use]
    pub fn read(text: &str) -> Option<(Self, &str)> {
        let (mut out, mut rest) = Self::read_mantissa(text)?;
        if let Some((exponent, after)) = read_exponent(rest) {
            out.exponent = out.exponent.saturating_add(exponent);
            rest = after;
        }
        Some((out, rest))
    }

    /// As [`Decimal::read`] without an exponent.
    #[must_use]
    pub fn read_mantissa(text: &str) -> Option<(Self, &str)> {
        let (negative, unsigned) = match text.as_bytes().first()? {
            b'-' => (true, text.get(1..)?),
            b'+' => (false, text.get(1..)?),
            _ => (false, text),
        };
        let mut digits = String::new();
        let mut exponent = 0_i64;
        let mut point = false;
        let mut end = 0;
        for c in unsigned.chars() {
            match c {
                '0'..='9' => {
                    digits.push(c);
                    if point {
                        exponent -= 1;
                    }
                }
                '.' if !point => point = true,
                _ => break,
            }
            end += 1;
        }
        if digits.is_empty() {
            return None;
        }
        let rest = unsigned.get(end..)?;
        Some((
            Self {
                negative,
                digits,
                exponent,
            },
            rest,
        ))
    }

    /// The shortest decimal that reads back as `value`; `None` if it is not finite.
    #[must_use]
    pub fn shortest(value: f64) -> Option<Self> {
        if !value.is_finite() {
            return None;
        }
        let text = format!("{value:e}");
        Self::read(&text).map(|(d, _)| d)
    }

    /// Exponent of ten of the last digit as written.
    #[must_use]
    pub fn last_place(&self) -> i64 {
        self.exponent
    }

    /// Whether a minus sign stands before it.
    #[must_use]
    pub fn is_negative(&self) -> bool {
        self.negative
    }

    /// Whether all digits are zero.
    #[must_use]
    pub fn is_zero(&self) -> bool {
        self.digits.bytes().all(|b| b == b'0')
    }

    /// Times 10^`by`, exactly.
    #[must_use]
    pub fn shifted(mut self, by: i64) -> Self {
        self.exponent = self.exponent.saturating_add(by);
        self
    }

    /// Times a whole number, exactly.
    #[must_use]
    pub fn times(mut self, factor: u32) -> Self {
        if factor == 1 {
            return self;
        }
        let mut carry = 0_u64;
        let mut reversed = Vec::with_capacity(self.digits.len() + 10);
        for b in self.digits.bytes().rev() {
            let product = u64::from(b - b'0') * u64::from(factor) + carry;
            reversed.push(b'0' + (product % 10) as u8);
            carry = product / 10;
        }
        while carry > 0 {
            reversed.push(b'0' + (carry % 10) as u8);
            carry /= 10;
        }
        self.digits = reversed.iter().rev().map(|b| char::from(*b)).collect();
        self
    }

    /// The nearest binary number; `None` if it is too large, or not zero but too small.
    #[must_use]
    pub fn to_f64(&self) -> Option<f64> {
        if self.exponent.abs() > EXPONENT_LIMIT {
            return self.is_zero().then_some(0.0);
        }
        let sign = if self.negative { "-" } else { "" };
        let value: f64 = format!("{sign}{}e{}", self.digits, self.exponent)
            .parse()
            .ok()?;
        (value.is_finite() && (value != 0.0 || self.is_zero())).then_some(value)
    }

    /// Plain text, without exponent where that stays readable.
    #[must_use]
    pub fn text(&self) -> String {
        let trimmed = self.digits.trim_start_matches('0');
        let significant = trimmed.trim_end_matches('0');
        let exponent = self.exponent + (trimmed.len() - significant.len()) as i64;
        let sign = if self.negative { "-" } else { "" };
        if significant.is_empty() {
            return format!("{sign}0");
        }
        let length = significant.len() as i64;
        let first_place = exponent + length - 1;
        if !(-6..=15).contains(&first_place) {
            let (head, tail) = significant.split_at(1);
            let point = if tail.is_empty() { "" } else { "." };
            return format!("{sign}{head}{point}{tail}e{first_place}");
        }
        if exponent >= 0 {
            return format!("{sign}{significant}{}", "0".repeat(exponent as usize));
        }
        if first_place >= 0 {
            let (whole, part) = significant.split_at((first_place + 1) as usize);
            return format!("{sign}{whole}.{part}");
        }
        let zeros = "0".repeat((-first_place - 1) as usize);
        format!("{sign}0.{zeros}{significant}")
    }
}

/// Reads "e-3", "E+31"; `None` where the letter begins a unit ("eV").
pub fn read_exponent(text: &str) -> Option<(i64, &str)> {
    let after = text.strip_prefix(['e', 'E'])?;
    read_integer(after)
}

/// Reads a signed whole number; huge ones saturate.
pub fn read_integer(text: &str) -> Option<(i64, &str)> {
    let (negative, unsigned) = match text.as_bytes().first()? {
        b'-' => (true, text.get(1..)?),
        b'+' => (false, text.get(1..)?),
        _ => (false, text),
    };
    let end = unsigned
        .find(|c: char| !c.is_ascii_digit())
        .unwrap_or(unsigned.len());
    let (digits, rest) = unsigned.split_at(end);
    if digits.is_empty() {
        return None;
    }
    let magnitude = digits
        .parse::<i64>()
        .unwrap_or(i64::MAX)
        .min(10 * EXPONENT_LIMIT);
    Some((if negative { -magnitude } else { magnitude }, rest))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn decimal(text: &str) -> Decimal {
        Decimal::read(text).unwrap().0
    }

    #[test]
    fn shifting_the_point_is_exact() {
        // 2874.2 * 1e-3 in binary is one unit in the last place off 2.8742.
        assert_eq!(decimal("2874.2").shifted(-3).to_f64(), Some(2.8742));
        assert_eq!(
            decimal("9.0e30").times(36).shifted(-31).to_f64(),
            Some(32.4)
        );
    }

    #[test]
    fn huge_and_tiny_numbers_are_not_numbers() {
        assert_eq!(decimal("1e400").to_f64(), None);
        assert_eq!(decimal("1e99999999999999999999").to_f64(), None);
        assert_eq!(decimal("1e-400").to_f64(), None);
        assert_eq!(decimal("0e-400").to_f64(), Some(0.0));
        assert!(Decimal::read("eV").is_none());
        assert!(Decimal::read(".").is_none());
        assert_eq!(Decimal::read("3eV").unwrap().1, "eV");
    }

    proptest! {
        #[test]
        fn shortest_text_reads_back_to_the_bit(bits in any::<u64>()) {
            let value = f64::from_bits(bits);
            prop_assume!(value.is_finite());
            let text = Decimal::shortest(value).unwrap().text();
            let back = decimal(&text).to_f64().unwrap();
            prop_assert_eq!(back.to_bits(), value.to_bits());
        }

        #[test]
        fn multiplying_agrees_with_integers(a in 0_u64..1_000_000_000_000, b in 1_u32..100_000) {
            let product = u128::from(a) * u128::from(b);
            prop_assert_eq!(decimal(&a.to_string()).times(b).text(), decimal(&product.to_string()).text());
        }
    }
}
