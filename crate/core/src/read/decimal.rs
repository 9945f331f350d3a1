//! Numbers written in decimals, as the double that lies nearest, of two equally near ones the even one: the bits that
//! `str::parse` gives. That one is quicker by a table of 10,000 bytes, which do not pack.

use core::cmp::Ordering;

/// More digits decide nothing but whether anything follows: halfway between two doubles lie numbers of 767 at most.
const MOST_DIGITS: usize = 800;

/// Digits with a point, a sign and an exponent or without; `None` for anything else.
pub fn decimal(text: &str) -> Option<f64> {
    let (negative, text) = signed(text);
    // Digits from the first that is not 0 on, the number of as many as fit into it, and how many stand behind the point.
    let (mut count, mut number, mut after) = (0, 0, 0);
    let (mut some, mut point, mut end, mut exponent) = (false, false, text.len(), 0);
    for (at, byte) in text.bytes().enumerate() {
        match byte {
            b'0'..=b'9' => {
                let digit = u64::from(byte - b'0');
                count += usize::from(count > 0 || digit > 0);
                if count < 20 {
                    number = 10 * number + digit;
                }
                after += i64::from(point);
                some = true;
            }
            b'.' if !point => point = true,
            b'e' | b'E' if some => {
                (end, exponent) = (at, whole(text.get(at + 1..)?)?);
                break;
            }
            _ => return None,
        }
    }
    let scale = exponent - after;
    let digits = text.bytes().take(end).filter(u8::is_ascii_digit).map(|digit| digit - b'0').skip_while(|d| *d == 0);
    let quickly = if count < 20 { quick(number, scale) } else { None };
    let value = quickly.unwrap_or_else(|| exact(digits, count, scale));
    some.then_some(if negative { -value } else { value })
}

fn signed(text: &str) -> (bool, &str) {
    match text.strip_prefix('-') {
        Some(rest) => (true, rest),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    }
}

/// An exponent; one beyond any length of text as one beyond it.
fn whole(text: &str) -> Option<i64> {
    let (negative, digits) = signed(text);
    if digits.is_empty() || !digits.bytes().all(|digit| digit.is_ascii_digit()) {
        return None;
    }
    let size = digits.bytes().fold(0, |size, digit| (10 * size + i64::from(digit - b'0')).min(1 << 40));
    Some(if negative { -size } else { size })
}

/// A whole number times a power of ten, where 128 bits suffice for it.
fn quick(number: u64, scale: i64) -> Option<f64> {
    if number == 0 {
        return Some(0.0);
    }
    if number <= 1 << 53 && scale.abs() <= 22 {
        // Both are doubles, so that only one step rounds.
        let power = (0..scale.abs()).fold(1.0, |power, _| 10.0 * power);
        return Some(if scale < 0 { number as f64 / power } else { number as f64 * power });
    }
    if !(-54..0).contains(&scale) {
        return None;
    }
    let fives = (scale..0).fold(1_u128, |power, _| 5 * power);
    let zeros = number.leading_zeros();
    let shifted = number << zeros;
    let (mut quotient, mut rest) = match u64::try_from(fives) {
        Ok(fives) => (shifted / fives, u128::from(shifted % fives)),
        Err(_) => (0, u128::from(shifted)),
    };
    // The power of five is below 2¹²⁶, so that no rest runs over; 55 bits are those of a double and two to round by.
    let mut exponent = scale - i64::from(zeros);
    while quotient < 1 << 54 {
        rest *= 2;
        quotient *= 2;
        if rest >= fives {
            rest -= fives;
            quotient += 1;
        }
        exponent -= 1;
    }
    Some(rounded(quotient, exponent, rest > 0))
}

/// The same of any length.
fn exact(digits: impl Iterator<Item = u8>, count: usize, scale: i64) -> f64 {
    // The number lies between 10 to the power of this, less one, and 10 to the power of this.
    let size = scale + count as i64;
    if !(-323..=310).contains(&size) {
        return if size > 310 { f64::INFINITY } else { 0.0 };
    }
    let mut number = Whole(Vec::new());
    let mut more = false;
    for (at, digit) in digits.enumerate() {
        match at < MOST_DIGITS {
            true => number.times(10, u32::from(digit)),
            false => more |= digit > 0,
        }
    }
    let scale = scale + count.saturating_sub(MOST_DIGITS) as i64;
    let mut divisor = Whole(vec![1]);
    let power = if scale < 0 { &mut divisor } else { &mut number };
    for _ in 0..scale.abs() / 9 {
        power.times(1_000_000_000, 0);
    }
    for _ in 0..scale.abs() % 9 {
        power.times(10, 0);
    }
    // Both get as many bits, then the quotient 64, one by one.
    let longer = number.bits().max(divisor.bits());
    let exponent = number.bits() as i64 - divisor.bits() as i64 - 63;
    for one in [&mut number, &mut divisor] {
        one.shift(longer - one.bits());
    }
    let mut quotient = 0;
    for _ in 0..64 {
        let bit = number.cmp(&divisor) != Ordering::Less;
        if bit {
            number.subtract(&divisor);
        }
        quotient = quotient << 1 | u64::from(bit);
        number.shift(1);
    }
    rounded(quotient, exponent, more || number.0.iter().any(|part| *part > 0))
}

/// `number` times a power of two, and a little more or not, as a double; `number` has 55 bits or more.
fn rounded(number: u64, exponent: i64, more: bool) -> f64 {
    let last = (exponent + 11 - i64::from(number.leading_zeros())).max(-1074);
    let dropped = last - exponent;
    if dropped > 64 {
        return 0.0;
    }
    let kept = if dropped > 63 { 0 } else { number >> dropped };
    let half = 1_u64 << (dropped - 1);
    // Bits that are dropped, but for the highest of them.
    let below = more || number & (half - 1) > 0;
    let up = number & half > 0 && (below || kept % 2 == 1);
    let infinite = f64::INFINITY.to_bits();
    let bits = (((last + 1074) as u64) << 52) + kept + u64::from(up);
    f64::from_bits(bits.min(infinite))
}

/// A whole number of any length, the lowest 32 bits first.
#[derive(Eq, PartialEq)]
struct Whole(Vec<u32>);

impl Whole {
    fn times(&mut self, factor: u32, more: u32) {
        let mut over = u64::from(more);
        for part in &mut self.0 {
            over += u64::from(factor) * u64::from(*part);
            *part = over as u32;
            over >>= 32;
        }
        if over > 0 {
            self.0.push(over as u32);
        }
    }

    fn bits(&self) -> usize {
        let zeros = self.0.iter().rev().take_while(|part| **part == 0).count();
        let highest = self.0.iter().rev().nth(zeros).map_or(0, |part| part.leading_zeros() as usize);
        32 * (self.0.len() - zeros) - highest
    }

    fn shift(&mut self, bits: usize) {
        let mut over = 0;
        for part in &mut self.0 {
            let shifted = u64::from(*part) << (bits % 32) | over;
            *part = shifted as u32;
            over = shifted >> 32;
        }
        if over > 0 {
            self.0.push(over as u32);
        }
        self.0.splice(0..0, (0..bits / 32).map(|_| 0));
    }

    /// Less a number that is not greater.
    fn subtract(&mut self, other: &Self) {
        let mut borrowed = 0;
        for (part, less) in self.0.iter_mut().zip(other.0.iter().copied().chain(core::iter::repeat(0))) {
            let rest = i64::from(*part) - i64::from(less) - borrowed;
            *part = rest as u32;
            borrowed = i64::from(rest < 0);
        }
    }

    fn cmp(&self, other: &Self) -> Ordering {
        let parts = |one: &Self, at: usize| one.0.get(at).copied().unwrap_or(0);
        let most = self.0.len().max(other.0.len());
        (0..most)
            .rev()
            .map(|at| parts(self, at).cmp(&parts(other, at)))
            .find(|one| one.is_ne())
            .unwrap_or(Ordering::Equal)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn assert_parsed(text: &str) {
        let [own, library] = [decimal(text), text.parse().ok()].map(|value| value.map(f64::to_bits));
        assert_eq!(own, library, "{text}");
    }

    #[test]
    fn what_is_no_number_is_none() {
        for text in
            ["", ".", "+", "-", "e1", ".e1", "1e", "1e+", "1e1.0", "1.2.3", "--1", "+-1", "1 ", "1_0", "inf", "nan"]
        {
            assert_eq!(decimal(text), None, "{text}");
        }
        for text in
            ["1.", ".5", "+.5e-0", "-0", "-0.0e5", "00012", "1E5", "0e99999999999999999999", "1e-99999999999999999999"]
        {
            assert_parsed(text);
        }
    }

    #[test]
    fn borders_are_met() {
        for text in [
            "9007199254740993",
            "9007199254740993.0000000000000000000001",
            "4503599627370497.5",
            "1e23",
            "8.5e22",
            "2.2250738585072011e-308",
            "2.2250738585072014e-308",
            "4.9406564584124654e-324",
            "2.4703282292062327e-324",
            "2.4703282292062328e-324",
            "1.7976931348623157e308",
            "1.7976931348623158e308",
            "1.7976931348623159e308",
            "1e309",
            "1e-323",
            "1e-324",
            "6.9533558078350046e-310",
            "123456789012345678901234567890",
        ] {
            assert_parsed(text);
        }
        let lowest = format!("{:.1100}", f64::from_bits(3));
        for tail in ["", "1", "0000001"] {
            assert_parsed(&format!("{lowest}{tail}"));
        }
        assert_parsed(&format!("0.{}1e{}", "0".repeat(5000), 5001));
        assert_parsed(&format!("1{}e-5000", "0".repeat(5000)));
        assert_parsed(&format!("9007199254740993.{}1", "0".repeat(2000)));
    }

    /// Doubles of all sizes in as many digits as there are ways, and the middles between them.
    #[test]
    fn all_bits_are_those_of_the_library() {
        let mut state = 1_u64;
        let mut next = || {
            state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            state ^ state >> 33
        };
        for _ in 0..40_000 {
            let value = f64::from_bits(next());
            if !value.is_finite() {
                continue;
            }
            let digits = next() as usize % 30;
            let small = (next() as i64 >> (next() % 64)) as f64 / 1000.0;
            for text in [
                format!("{value:e}"),
                format!("{value:.digits$e}"),
                format!("{small:.digits$}"),
                format!("{}e{}", next(), next() as i64 % 40),
                format!("{}.{}e{}", next() % 100, next(), next() as i64 % 340),
                format!("{:.60e}", value * 0.5 + f64::from_bits(value.to_bits() ^ 1) * 0.5),
            ] {
                assert_parsed(&text);
            }
            // Exactly in the middle of two doubles, a number of one bit more, and a little above.
            let odd = u128::from(next() >> 10 | 1 << 53 | 1);
            let power = (next() % 31) as u32;
            assert_parsed(&format!("{}", odd << power));
            assert_parsed(&format!("{}e-{power}", odd * 5_u128.pow(power)));
            assert_parsed(&format!("{}.{:030}1e-{power}", odd * 5_u128.pow(power), 0));
        }
    }
}
