//! What does not change with the numbers.

use std::collections::{BTreeMap, HashMap};
use std::sync::Arc;

use serde_json::Value;

use super::{Vehicle, change, rules};
use crate::axes::CORNERS;
use crate::error::{Result, Violation, refuse};
use crate::hydraulics::Network;
use crate::spec::{
    Described, Parameter, Slot, Spec, Tree, describe, expand, fill, join, nearest, number, read_tree, walk,
};

/// Elements, nodes, lines, names: everything of a vehicle but its numbers.
#[derive(Debug)]
pub(crate) struct Structure {
    /// The file's tree, with slots in place of numbers.
    pub given: Tree,
    /// Path and description of every slot.
    pub parameters: Vec<Parameter>,
    /// Every path that can be read, the members of groups too.
    pub readable: HashMap<String, usize>,
    /// The file with pairs and layouts written out.
    pub spec: Spec<Slot>,
    /// Nodes and lines of the oil.
    pub network: Network,
    /// Names of the mechanical elements.
    pub names: ElementNames,
}

/// Names of the mechanical elements, made once.
#[derive(Debug)]
pub(crate) struct ElementNames {
    pub corners: [CornerNames; 4],
    pub front_bar: Arc<str>,
    pub rear_bar: Arc<str>,
    pub links: Vec<Arc<str>>,
    pub gravity: Arc<str>,
}

#[derive(Debug)]
pub(crate) struct CornerNames {
    pub wheel: Arc<str>,
    pub tyre: Arc<str>,
    pub spring: Arc<str>,
    pub spring_geometry: Arc<str>,
    pub bump_stop: Arc<str>,
    pub rebound_stop: Arc<str>,
    pub damper: Arc<str>,
    pub damper_friction: Arc<str>,
    pub mount: Arc<str>,
    pub cylinder_friction: Arc<str>,
    pub cylinder_geometry: Arc<str>,
}

impl ElementNames {
    fn new(spec: &Spec<Slot>) -> Self {
        let corners = CORNERS.map(|corner| {
            let name = |part: &str| Arc::from(format!("{}.{part}", corner.name()));
            CornerNames {
                wheel: name("wheel"),
                tyre: name("tyre"),
                spring: name("spring"),
                spring_geometry: name("spring.geometry"),
                bump_stop: name("bump_stop"),
                rebound_stop: name("rebound_stop"),
                damper: name("damper"),
                damper_friction: name("damper.friction"),
                mount: name("mount"),
                cylinder_friction: name("cylinder.friction"),
                cylinder_geometry: name("cylinder.geometry"),
            }
        });
        let links = spec.links.0.keys().map(|name| format!("links.{name}").into()).collect();
        Self {
            corners,
            front_bar: "front.anti_roll_bar".into(),
            rear_bar: "rear.anti_roll_bar".into(),
            links,
            gravity: "gravity".into(),
        }
    }
}

impl Structure {
    pub(crate) fn unknown_path(&self, path: &str) -> Violation {
        let mut known: Vec<&str> = self.readable.keys().map(String::as_str).collect();
        known.sort_unstable();
        Violation::new(path, "", "no such path").hint(nearest(path, known.into_iter()))
    }

    /// Paths in circuits that share a slot.
    pub(crate) fn members(&self, slot: usize) -> impl Iterator<Item = &str> {
        self.readable
            .iter()
            .filter(move |(path, other)| **other == slot && path.starts_with("circuits."))
            .map(|(path, _)| path.as_str())
    }

    /// Whether the number stands where a change of it would alter the coordinates: a way without resistance and
    /// inertance that it would open one more in, a node that it would give compliance.
    pub(crate) fn decides_structure(&self, slot: usize, numbers: &[f64]) -> bool {
        if numbers[slot] != 0.0 {
            return false;
        }
        let kinds = |numbers: &[f64]| {
            let state = self.network.design_state(&self.spec, numbers);
            let values = self.network.values(&self.spec, numbers, &state);
            let lines = values.lines.iter().map(|line| (line.is_ideal(), line.inertance > 0.0));
            let nodes = (0..self.network.nodes.len()).map(|node| values.node_compliance(node) > 0.0);
            (lines.collect::<Vec<_>>(), nodes.collect::<Vec<_>>())
        };
        let mut moved = numbers.to_vec();
        moved[slot] = f64::MIN_POSITIVE.sqrt();
        kinds(numbers) != kinds(&moved)
    }

    /// The file's tree with numbers in SI.
    pub(crate) fn filled(&self, numbers: &[f64]) -> Tree {
        fill(&self.given, Spec::<f64>::SCHEMA, &|slot| {
            slot.as_u64().map_or(Value::Null, |slot| numbers[slot as usize].into())
        })
    }
}

impl Vehicle {
    /// Builds a vehicle from a raw tree and checks its settings, or reports everything that is wrong with it.
    pub(crate) fn from_tree(raw: &Tree) -> Result<Self> {
        let vehicle = Self::without_checked_settings(raw)?;
        vehicle.check_settings()?;
        Ok(vehicle)
    }

    /// The same for a tree whose settings have been checked before.
    pub(super) fn without_checked_settings(raw: &Tree) -> Result<Self> {
        let mut reading = read_tree(raw);
        if reading.violations.iter().any(|violation| violation.rule.contains("newer than this library")) {
            // What a newer format means cannot be judged here.
            reading.violations.retain(|violation| violation.path == "format");
            refuse(std::mem::take(&mut reading.violations))?;
        }
        let expanded = expand(&reading.tree);
        let mut readable: HashMap<String, usize> =
            reading.parameters.iter().enumerate().map(|(slot, parameter)| (parameter.path.clone(), slot)).collect();
        walk(&expanded, Spec::<f64>::SCHEMA, "", &mut |path, _, slot| {
            if let Some(slot) = slot.as_u64() {
                readable.insert(path, slot as usize);
            }
        });
        let atmosphere = readable.get("atmosphere").map_or(f64::NAN, |&slot| reading.numbers[slot]);
        let mut tree = reading.tree;
        let mut violations = reading.violations;
        settings_to_si(&mut tree, &reading.parameters, &readable, atmosphere, &mut violations);
        violations.extend(rules::groups(raw));
        let spec: Spec<Slot> = match serde_json::from_value(Value::Object(expand(&tree))) {
            Ok(spec) => spec,
            Err(error) => {
                // The reader leaves nothing that does not fit; should it ever, say so and stop.
                violations.push(Violation::new("", "", error.to_string()));
                refuse(violations)?;
                unreachable!("refused above")
            }
        };
        violations.extend(rules::connections(&spec));
        violations.extend(rules::check(&spec, &reading.parameters, &reading.numbers));
        // A number that was already refused by the reader is NaN; it is not reported twice.
        let mut seen: Vec<String> = Vec::new();
        violations.retain(|violation| {
            let text = violation.to_string();
            let new = !seen.contains(&text);
            seen.push(text);
            new
        });
        refuse(violations)?;
        let network = Network::new(&spec);
        let structure = Structure {
            given: tree,
            parameters: reading.parameters,
            readable,
            names: ElementNames::new(&spec),
            spec,
            network,
        };
        Ok(Self { structure: Arc::new(structure), numbers: reading.numbers.into() })
    }

    // Each setting must give a vehicle that passes every check.
    fn check_settings(&self) -> Result<()> {
        let mut violations = Vec::new();
        for (name, set) in &self.spec().settings.0 {
            let changes: Vec<(String, Value)> = set.iter().map(|(path, value)| (path.clone(), value.clone())).collect();
            if let Err(crate::Error::InvalidInput { violations: wrong }) = change::apply(self, &changes) {
                violations.extend(wrong.into_iter().map(|mut violation| {
                    violation.path = format!("settings.{name}.{}", violation.path);
                    violation
                }));
            }
        }
        refuse(violations)
    }
}

// Values of settings in SI, in place; those that cannot be read are reported.
fn settings_to_si(
    tree: &mut Tree,
    parameters: &[Parameter],
    readable: &HashMap<String, usize>,
    atmosphere: f64,
    violations: &mut Vec<Violation>,
) {
    let Some(Value::Object(settings)) = tree.get_mut("settings") else { return };
    for (name, set) in settings.iter_mut() {
        let Value::Object(set) = set else { continue };
        let flat = flatten(set);
        set.clear();
        for (path, value) in flat {
            let place = join(&join("settings", name), &path);
            let slot = readable.get(&path).copied().or_else(|| {
                let (left, _) = change::sides(&path)?;
                readable.get(&left).copied()
            });
            let Some(slot) = slot else {
                let mut known: Vec<&str> = readable.keys().map(String::as_str).collect();
                known.sort_unstable();
                violations.push(
                    Violation::new(place, describe(&value), "no such path").hint(nearest(&path, known.into_iter())),
                );
                continue;
            };
            match number(parameters[slot].field, &place, &value, atmosphere) {
                Ok(number) => {
                    let flag = matches!(parameters[slot].field.kind, crate::spec::Kind::Flag);
                    set.insert(path, if flag { (number == 1.0).into() } else { number.into() });
                }
                Err(violation) => violations.push(violation),
            }
        }
    }
}

// A setting may be written with quoted paths or as nested tables.
fn flatten(set: &Tree) -> BTreeMap<String, Value> {
    let mut flat = BTreeMap::new();
    for (key, value) in set {
        match value {
            Value::Object(inner) => {
                flat.extend(flatten(inner).into_iter().map(|(path, value)| (join(key, &path), value)));
            }
            value => {
                flat.insert(key.clone(), value.clone());
            }
        }
    }
    flat
}
