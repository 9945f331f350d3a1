//! Numbers as text, with the digits that they deserve.

/// A share in percent: one decimal from 1 % on, two significant digits below.
pub(super) fn percent(share: f64) -> String {
    let percent = share * 100.0;
    match percent {
        p if p >= 1.0 || p == 0.0 => format!("{p:.1}"),
        p if p >= 0.001 => significant(p, 2),
        _ => "under 0.001".into(),
    }
}

/// The share in percent that is left of 100 % beside one written by [`percent`], with as many decimals.
pub(super) fn percent_left(share: f64) -> String {
    let beside = percent(share);
    match beside.split_once('.') {
        _ if share > 0.0 && share < 1e-5 => "over 99.999".into(),
        Some((_, decimals)) => format!("{:.*}", decimals.len(), 100.0 * (1.0 - share)),
        None => format!("{:.1}", 100.0 * (1.0 - share)),
    }
}

/// Millimetres, whole: no model is better.
pub(super) fn millimetres(mm: f64) -> String {
    plain(format!("{mm:.0}"))
}

/// Coordinates and radii: one decimal, to compare with other tables.
pub(super) fn tenths(value: f64) -> String {
    plain(format!("{value:.1}"))
}

/// Components of unit vectors and shares.
pub(super) fn hundredths(value: f64) -> String {
    plain(format!("{value:.2}"))
}

/// At least this many significant digits, without exponent where it stays short.
pub(super) fn significant(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "0".into();
    }
    let scientific = format!("{value:.*e}", digits.saturating_sub(1));
    let exponent: i32 = scientific.split_once('e').and_then(|(_, e)| e.parse().ok()).unwrap_or(0);
    if !(-4..7).contains(&exponent) {
        return scientific;
    }
    let decimals = (digits as i32 - 1 - exponent).max(0) as usize;
    plain(format!("{value:.decimals$}"))
}

/// A value beside others up to a limit: as many decimals as give the limit three significant digits.
pub(super) fn beside(value: f64, limit: f64) -> String {
    match magnitude(limit) {
        exponent if (-4..7).contains(&exponent) => {
            plain(format!("{value:.*}", usize::try_from(2 - exponent).unwrap_or(0)))
        }
        exponent => match 3 + magnitude(value) - exponent {
            digits @ 1.. => significant(value, digits as usize),
            _ => "0".into(),
        },
    }
}

/// A number of a source: at most four significant digits, without zeros at the end.
pub(super) fn given(value: f64) -> String {
    let text = significant(value, 4);
    match text.contains('.') && !text.contains('e') {
        true => text.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => text,
    }
}

/// The same of what may be below zero, with the sign of mathematics.
pub(super) fn signed(value: f64) -> String {
    format!("{}{}", if value < 0.0 { "−" } else { "" }, given(value.abs()))
}

/// The power of ten of a number's first digit.
fn magnitude(value: f64) -> i32 {
    if value == 0.0 {
        return 0;
    }
    format!("{value:e}").split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0)
}

/// Zero has no sign.
fn plain(text: String) -> String {
    match text.strip_prefix('-') {
        Some(rest) if rest.bytes().all(|b| b == b'0' || b == b'.') => rest.to_owned(),
        _ => text,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_follow_size() {
        assert_eq!(percent(0.9721), "97.2");
        assert_eq!(percent(0.00123), "0.12");
        assert_eq!(percent(1e-9), "under 0.001");
        assert_eq!((percent(0.0004).as_str(), percent_left(0.0004).as_str()), ("0.040", "99.960"));
        assert_eq!((percent(0.0281).as_str(), percent_left(0.0281).as_str()), ("2.8", "97.2"));
        assert_eq!(percent_left(1e-9), "over 99.999");
        assert_eq!((percent(0.0).as_str(), percent_left(0.0).as_str()), ("0.0", "100.0"));
        assert_eq!(significant(12.345, 3), "12.3");
        assert_eq!(significant(-0.0012345, 3), "-0.00123");
        assert_eq!(significant(1.5e9, 3), "1.50e9");
        assert_eq!(significant(12345.0, 3), "12345");
        assert_eq!(millimetres(-0.2), "0");
        assert_eq!(
            ["0.033", "12.3", "-0.2", "0.0"],
            [beside(0.0331, 0.4).as_str(), &beside(12.34, 12.34), &beside(-0.17, 12.34), &beside(-0.01, 12.34)]
        );
        assert_eq!((beside(1234.4, 5000.0).as_str(), beside(1e-6, 3e-6).as_str()), ("1234", "1.00e-6"));
        assert_eq!((beside(-4.2e-8, 3e-6).as_str(), beside(4.2e-9, 3e-6).as_str()), ("-4e-8", "0"));
        assert_eq!(
            ["0.33", "0.004125", "25", "1.79", "0"],
            [0.33, 0.004125, 25.0, 1.79, 0.0].map(given).each_ref().map(String::as_str)
        );
    }
}
