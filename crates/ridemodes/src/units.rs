//! Text with a unit, turned into SI.

/// Exponents of m, kg, s, K, rad. The plane angle is kept as a dimension of its own, so that a
/// rate per degree is not taken for a rate per radian.
type Dimension = [i32; 5];

#[derive(Clone, Copy, Debug, PartialEq)]
struct Unit {
    factor: f64,
    dimension: Dimension,
}

const ONE: Unit = Unit { factor: 1.0, dimension: [0; 5] };

/// Standard atmosphere (ISO 2533), Pa.
pub const STANDARD_ATMOSPHERE: f64 = 101_325.0;

/// Standard acceleration of gravity (ISO 80000-3), m/s².
pub const STANDARD_GRAVITY: f64 = 9.806_65;

/// How a pressure is counted in text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Reference {
    Absolute,
    Gauge,
}

/// A number read from text.
#[derive(Debug, PartialEq)]
pub(crate) struct Quantity {
    /// Value in the SI unit asked for.
    pub value: f64,
    /// `abs` or `gauge`, where the text says so.
    pub reference: Option<Reference>,
}

/// Why a text is not a quantity of the unit asked for.
#[derive(Debug, PartialEq)]
pub(crate) struct Misread {
    pub rule: String,
    pub hint: String,
}

fn misread(rule: impl Into<String>, hint: impl Into<String>) -> Misread {
    Misread { rule: rule.into(), hint: hint.into() }
}

/// Reads `text`, e.g. `85 cm^3` or `32 bar abs`, as a quantity in `unit`, an SI unit such as `N/m`.
pub(crate) fn read(text: &str, unit: &str) -> Result<Quantity, Misread> {
    let text = text.trim();
    let end = number_length(text);
    let example = example(unit);
    let value: f64 = text[..end]
        .parse()
        .map_err(|_| misread("must be a number, or a text of number and unit", format!("for example \"{example}\"")))?;
    let mut rest = text[end..].trim();
    let mut reference = None;
    for (word, meaning) in [("abs", Reference::Absolute), ("gauge", Reference::Gauge)] {
        if let Some(front) = rest.strip_suffix(word) {
            reference = Some(meaning);
            rest = front.trim_end();
        }
    }
    let wanted = parse(unit).unwrap_or(ONE);
    // Temperatures in degrees Celsius are the one scale with an offset.
    if matches!(rest, "degC" | "°C") && wanted.dimension == [0, 0, 0, 1, 0] {
        return Ok(Quantity { value: value + 273.15, reference });
    }
    if rest.is_empty() {
        return if wanted.dimension == ONE.dimension {
            Ok(Quantity { value, reference })
        } else {
            Err(misread(
                "a number in a text needs its unit",
                format!("for example \"{example}\"; a plain number is SI"),
            ))
        };
    }
    let given = parse(rest)
        .ok_or_else(|| misread(format!("\"{rest}\" is not a unit known here"), format!("for example \"{example}\"")))?;
    if given.dimension != wanted.dimension {
        let mut hint = format!("for example \"{example}\"");
        let mut free = (given.dimension, wanted.dimension);
        free.0[4] = 0;
        free.1[4] = 0;
        if free.0 == free.1 {
            hint = format!("per rad or per deg is missing or too many, {hint}");
        }
        return Err(misread(format!("\"{rest}\" does not measure what [{unit}] measures"), hint));
    }
    Ok(Quantity { value: scaled(value, given.factor / wanted.factor), reference })
}

// Most factors are powers of ten: dividing by a whole number keeps 26 mm at 0.026 m to the last digit.
fn scaled(value: f64, factor: f64) -> f64 {
    let (whole, divisor) = (factor.round(), (1.0 / factor).round());
    let close = |exact: f64, rounded: f64| (exact - rounded).abs() <= 1e-12 * exact;
    if factor < 1.0 && close(1.0 / factor, divisor) {
        value / divisor
    } else if close(factor, whole) {
        value * whole
    } else {
        value * factor
    }
}

fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let mut end = 0;
    while end < bytes.len() {
        let exponent = matches!(bytes[end], b'e' | b'E')
            && bytes.get(end + 1).is_some_and(|&next| {
                next.is_ascii_digit()
                    || (matches!(next, b'+' | b'-') && bytes.get(end + 2).is_some_and(u8::is_ascii_digit))
            });
        if exponent {
            end += 2;
        } else if bytes[end].is_ascii_digit() || matches!(bytes[end], b'.' | b'+' | b'-') {
            end += 1;
        } else {
            break;
        }
    }
    end
}

fn example(unit: &str) -> &'static str {
    match unit {
        "m" => "12 mm",
        "m^3" => "85 cm^3",
        "Pa" => "32 bar abs",
        "N/m" => "25 N/mm",
        "N*s/m" => "1.8 kN*s/m",
        "N*m/rad" => "300 N*m/deg",
        "K" => "40 degC",
        "m^2/s" => "15 mm^2/s",
        "Pa*s/m^3" => "2 bar*s/L",
        "kg*m^2" => "480 kg*m^2",
        "kg" => "1.2 t",
        "kg/m^3" => "860 kg/m^3",
        "1/K" => "7e-4 1/K",
        "rad" => "4 deg",
        _ => "0.7",
    }
}

/// Products and quotients of unit symbols; `/` divides by the one factor after it.
fn parse(text: &str) -> Option<Unit> {
    let mut result = ONE;
    let mut divide = false;
    let mut pending = false; // an operator waits for its factor
    let mut rest = text.trim();
    if rest.is_empty() {
        return None;
    }
    while !rest.is_empty() {
        let first = rest.chars().next()?;
        if matches!(first, '*' | '·' | '/' | ' ') {
            if matches!(first, '*' | '·' | '/') {
                if pending {
                    return None;
                }
                pending = true;
                divide = first == '/';
            }
            rest = &rest[first.len_utf8()..];
            continue;
        }
        let length = rest.find(['*', '·', '/', ' ']).unwrap_or(rest.len());
        let factor = power(&rest[..length])?;
        let sign = if divide { -1 } else { 1 };
        result.factor *= factor.factor.powi(sign);
        for (total, one) in result.dimension.iter_mut().zip(factor.dimension) {
            *total += sign * one;
        }
        (divide, pending) = (false, false);
        rest = &rest[length..];
    }
    (!pending).then_some(result)
}

fn power(text: &str) -> Option<Unit> {
    if text == "1" {
        return Some(ONE);
    }
    let (symbol, exponent) = if let Some((symbol, exponent)) = text.split_once('^') {
        (symbol, exponent.parse::<i32>().ok().filter(|e| (-6..=6).contains(e))?)
    } else if let Some(symbol) = text.strip_suffix('²') {
        (symbol, 2)
    } else if let Some(symbol) = text.strip_suffix('³') {
        (symbol, 3)
    } else if let Some(symbol) = text.strip_suffix(['2', '3']) {
        (symbol, if text.ends_with('2') { 2 } else { 3 })
    } else {
        (text, 1)
    };
    let unit = symbol_unit(symbol)?;
    let mut result = Unit { factor: unit.factor.powi(exponent), dimension: unit.dimension };
    for one in &mut result.dimension {
        *one *= exponent;
    }
    Some(result)
}

fn symbol_unit(symbol: &str) -> Option<Unit> {
    if let Some(unit) = plain(symbol) {
        return Some(unit);
    }
    let first = symbol.chars().next()?;
    let prefix = match first {
        'G' => 1e9,
        'M' => 1e6,
        'k' => 1e3,
        'h' => 1e2,
        'd' => 1e-1,
        'c' => 1e-2,
        'm' => 1e-3,
        'µ' | 'μ' | 'u' => 1e-6,
        'n' => 1e-9,
        _ => return None,
    };
    let base = &symbol[first.len_utf8()..];
    if !matches!(base, "m" | "g" | "s" | "N" | "Pa" | "bar" | "J" | "W" | "L" | "l" | "St" | "P" | "rad" | "Hz") {
        return None;
    }
    let unit = plain(base)?;
    Some(Unit { factor: unit.factor * prefix, ..unit })
}

fn plain(symbol: &str) -> Option<Unit> {
    const DEG: f64 = std::f64::consts::PI / 180.0;
    const INCH: f64 = 0.0254;
    const POUND: f64 = 0.453_592_37;
    let (factor, dimension) = match symbol {
        "m" => (1.0, [1, 0, 0, 0, 0]),
        "g" => (1e-3, [0, 1, 0, 0, 0]),
        "kg" => (1.0, [0, 1, 0, 0, 0]),
        "t" => (1e3, [0, 1, 0, 0, 0]),
        "s" => (1.0, [0, 0, 1, 0, 0]),
        "min" => (60.0, [0, 0, 1, 0, 0]),
        "h" => (3600.0, [0, 0, 1, 0, 0]),
        "Hz" => (1.0, [0, 0, -1, 0, 0]),
        "K" => (1.0, [0, 0, 0, 1, 0]),
        "rad" => (1.0, [0, 0, 0, 0, 1]),
        "deg" | "°" => (DEG, [0, 0, 0, 0, 1]),
        "N" => (1.0, [1, 1, -2, 0, 0]),
        "Pa" => (1.0, [-1, 1, -2, 0, 0]),
        "bar" => (1e5, [-1, 1, -2, 0, 0]),
        "J" => (1.0, [2, 1, -2, 0, 0]),
        "W" => (1.0, [2, 1, -3, 0, 0]),
        "L" | "l" => (1e-3, [3, 0, 0, 0, 0]),
        "St" => (1e-4, [2, 0, -1, 0, 0]),
        "P" => (0.1, [-1, 1, -1, 0, 0]),
        "in" => (INCH, [1, 0, 0, 0, 0]),
        "ft" => (12.0 * INCH, [1, 0, 0, 0, 0]),
        "lb" => (POUND, [0, 1, 0, 0, 0]),
        "lbf" => (POUND * STANDARD_GRAVITY, [1, 1, -2, 0, 0]),
        "psi" => (POUND * STANDARD_GRAVITY / (INCH * INCH), [-1, 1, -2, 0, 0]),
        "%" => (1e-2, [0; 5]),
        _ => return None,
    };
    Some(Unit { factor, dimension })
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    // Factors from the SI brochure and, for inch and pound, from the international yard and pound
    // agreement of 1959 (from memory); each product worked out by hand.
    #[test]
    fn text_becomes_si() {
        for (text, unit, expected) in [
            ("85 cm^3", "m^3", 85e-6),
            ("85cm3", "m^3", 85e-6),
            ("4 deg", "rad", 0.069_813_170_079_773_18),
            ("32 bar abs", "Pa", 32e5),
            ("25 N/mm", "N/m", 25_000.0),
            ("1.8 kN*s/m", "N*s/m", 1800.0),
            ("2 bar*s/L", "Pa*s/m^3", 2e8),
            ("300 N*m/deg", "N*m/rad", 300.0 * 180.0 / std::f64::consts::PI),
            ("-30 degC", "K", 243.15),
            ("32 cSt", "m^2/s", 32e-6),
            ("1.2 t", "kg", 1200.0),
            ("60 %", "1", 0.6),
            ("7", "1", 7.0),
            ("1e-3 m", "m", 1e-3),
            ("100 lbf/in", "N/m", 17_512.683_524_647_64),
            ("1 L/min", "m^3/s", 1e-3 / 60.0),
            ("1 kg m²", "kg*m^2", 1.0),
        ] {
            let read = read(text, unit).unwrap_or_else(|e| panic!("{text}: {e:?}"));
            assert_relative_eq!(read.value, expected, max_relative = 1e-14);
        }
    }

    #[test]
    fn decimal_units_are_exact() {
        for (text, unit, expected) in [
            ("26 mm", "m", 0.026),
            ("85 cm^3", "m^3", 85e-6),
            ("0.7 bar*s/L", "Pa*s/m^3", 7e7),
            ("15 mm^2/s", "m^2/s", 15e-6),
        ] {
            assert_eq!(read(text, unit).unwrap().value, expected);
        }
    }

    #[test]
    fn a_wrong_text_says_why() {
        assert!(read("25 N", "N/m").unwrap_err().rule.contains("does not measure"));
        assert!(read("300 N*m", "N*m/rad").unwrap_err().hint.contains("per deg"));
        assert!(read("25", "N/m").unwrap_err().rule.contains("needs its unit"));
        assert!(read("25 furlong", "m").unwrap_err().rule.contains("not a unit"));
        assert!(read("fast", "m").unwrap_err().rule.contains("must be a number"));
        assert!(read("1 m//s", "m/s").is_err());
        assert!(read("1 m/", "m").is_err());
        assert_eq!(read("3 bar gauge", "Pa").unwrap().reference, Some(Reference::Gauge));
    }
}
