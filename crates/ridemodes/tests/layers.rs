//! A module uses lower layers only. The layers are data here; any other edge fails.

use std::fs;
use std::path::{Path, PathBuf};

/// Modules of `src` from the lowest layer to the highest; those of one layer stand in one row.
const LAYERS: [&[&str]; 13] = [
    &["error", "axes", "units", "numerics"],
    &["spec"],
    &["equivalent", "gas"],
    &["hydraulics"],
    &["vehicle"],
    &["statics"],
    &["states"],
    &["system"],
    &["corner_motions", "modes"],
    &["frequency"],
    &["decoupling", "readings", "sensitivities", "sweep"],
    &["report"],
    &["examples"],
];

fn layer(module: &str) -> usize {
    LAYERS
        .iter()
        .position(|layer| layer.contains(&module))
        .unwrap_or_else(|| panic!("src/{module} is in no layer: add it to LAYERS and to DEVELOPERS.md"))
}

fn sources(folder: &Path, found: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            sources(&path, found);
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            found.push(path);
        }
    }
}

// Numbers such as (N4) or (N1, N3) of a chapter's letter in a text.
fn cited(text: &str, letter: char) -> Vec<u32> {
    let mut numbers = Vec::new();
    for part in text.split('(').skip(1) {
        let inside = part.split(')').next().unwrap_or("");
        let all: Option<Vec<u32>> =
            inside.split(", ").map(|one| one.strip_prefix(letter).and_then(|number| number.parse().ok())).collect();
        numbers.extend(all.unwrap_or_default());
    }
    numbers.sort_unstable();
    numbers.dedup();
    numbers
}

// Every equation of the chapters on the network and on the operating point is cited by the code, and none that is not there.
#[test]
fn code_and_chapter_cite_each_other() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut files = Vec::new();
    sources(&root.join("src"), &mut files);
    let code: String = files.iter().map(|file| fs::read_to_string(file).unwrap()).collect();
    for (letter, page, count) in [('N', "docs/network.md", 16), ('O', "docs/operating_point.md", 14)] {
        let chapter = cited(&fs::read_to_string(root.join(page)).unwrap(), letter);
        assert_eq!(chapter, (1..=count).collect::<Vec<u32>>());
        assert_eq!(cited(&code, letter), chapter);
    }
}

#[test]
fn modules_use_lower_layers_only() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut files = Vec::new();
    sources(&root, &mut files);
    let mut edges = 0;
    for file in files {
        let first = file.strip_prefix(&root).unwrap().components().next().unwrap();
        let module = Path::new(first.as_os_str()).file_stem().unwrap().to_str().unwrap().to_owned();
        if module == "lib" {
            continue;
        }
        let text = fs::read_to_string(&file).unwrap();
        for used in text.split("crate::").skip(1) {
            let used: String = used.chars().take_while(|c| c.is_ascii_alphanumeric() || *c == '_').collect();
            // `crate::Error` and the like are the public surface of a lower layer.
            if used.is_empty() || used.starts_with(char::is_uppercase) || used == module {
                continue;
            }
            edges += 1;
            assert!(
                layer(&used) < layer(&module) || (layer(&used) == 0 && layer(&module) == 0),
                "{} uses {used}, which is not below it",
                file.display()
            );
        }
    }
    assert!(edges > 50, "only {edges} edges found: is the search still right?");
}
