//! Arbitrary text is read or refused, never a panic.

use proptest::prelude::*;
use ridemodes::{Error, Vehicle};

use crate::support::fixed;

// Whatever is refused is refused with something to read.
fn read(text: &str) -> Result<(), TestCaseError> {
    for result in [Vehicle::from_text(text), Vehicle::from_toml(text), Vehicle::from_json(text)] {
        match result {
            Ok(car) => prop_assert_eq!(Vehicle::from_toml(&car.to_toml()), Ok(car)),
            Err(Error::InvalidInput { violations }) => {
                prop_assert!(!violations.is_empty());
                prop_assert!(violations.iter().all(|violation| !violation.rule.is_empty()));
            }
            Err(Error::Parse { line, message, .. }) => prop_assert!(line >= 1 && !message.is_empty()),
            Err(other) => prop_assert!(false, "{}", other),
        }
    }
    Ok(())
}

// Pieces that are likely to matter.
const PIECES: [&str; 24] = [
    "nan",
    "-inf",
    "1e400",
    "-1",
    "0",
    "\"\"",
    "\"bar\"",
    "\"1 bar\"",
    "\"-3 °C²\"",
    "[]",
    "{}",
    "[[body]]",
    "[front.left]",
    "=",
    ".",
    "both",
    "\"²\"",
    "\"1e m\"",
    "true",
    "1979-05-27",
    "format = 2",
    "\u{0}",
    "é",
    "settings",
];

fn boundary(text: &str, at: usize) -> usize {
    (0..=at % (text.len() + 1)).rev().find(|&i| text.is_char_boundary(i)).unwrap_or(0)
}

proptest! {
    #![proptest_config(fixed(256))]

    #[test]
    fn any_text(text in any::<String>()) {
        read(&text)?;
    }

    #[test]
    fn text_that_looks_like_a_file(text in "([a-z_.]{1,8} = [-0-9a-z.\"{}\\[\\]]{0,12}\n|\\[[a-z.]{1,12}\\]\n){0,12}") {
        read(&text)?;
    }

    #[test]
    fn a_file_with_pieces_put_in(cuts in proptest::collection::vec((any::<usize>(), 0..24_usize, 0..40_usize), 1..4), json in any::<bool>()) {
        for name in Vehicle::examples() {
            let car = Vehicle::example(name).unwrap();
            let mut text = if json { car.to_json() } else { car.to_toml() };
            for (at, piece, length) in &cuts {
                let start = boundary(&text, *at);
                let end = boundary(&text, (start + length).min(text.len()));
                text.replace_range(start..end.max(start), PIECES[*piece]);
            }
            read(&text)?;
        }
    }

    // Any text where a number goes.
    #[test]
    fn any_text_as_a_value(text in prop_oneof![any::<String>(), "[-+0-9.e]{0,6} ?[a-zµ°·^*/²³0-9 ]{0,10}( abs| gauge)?"]) {
        let car = Vehicle::example("roadster").unwrap();
        for path in ["body.mass", "layout.pressure", "oil.air_fraction", "temperature", "front.left.spring.rate"] {
            if let Ok(changed) = car.with_values([(path, text.as_str())]) {
                prop_assert!(changed.value(path).unwrap().is_finite());
            }
        }
    }

    // Any text where a path goes.
    #[test]
    fn any_text_as_a_path(path in prop_oneof![any::<String>(), "(front|rear|circuits|layout|settings|body)(\\.(both|left|main|spring|rate|\\*)){0,5}\\.?"]) {
        let car = Vehicle::example("roadster").unwrap();
        if let Err(error) = car.value(&path) {
            prop_assert!(error.to_string().contains("violation"));
        }
        if let Err(error) = car.with_values([(path.as_str(), 1.0)]) {
            prop_assert!(error.to_string().contains("violation"));
        }
        let _ = car.with_setting(&path);
        let _ = Vehicle::example(&path);
    }
}
