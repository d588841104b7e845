//! What can go wrong, as one enum with structured fields.

use std::fmt;

/// One rule that the input breaks.
///
/// `value` is the offending value as it was given, `unit` the unit the place expects ("1" if none,
/// empty where there is none to name), `rule` what must hold and `hint` the way out (may be empty).
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Violation {
    /// Place in the vehicle, e.g. `front.both.spring.rate`.
    pub path: String,
    /// The value as given.
    pub value: String,
    /// Unit that the place expects.
    pub unit: String,
    /// The rule that is broken.
    pub rule: String,
    /// The way out, or the likely slip.
    pub hint: String,
}

impl Violation {
    pub(crate) fn new(path: impl Into<String>, value: impl Into<String>, rule: impl Into<String>) -> Self {
        Self { path: path.into(), value: value.into(), unit: String::new(), rule: rule.into(), hint: String::new() }
    }

    pub(crate) fn unit(mut self, unit: &str) -> Self {
        self.unit = unit.to_owned();
        self
    }

    pub(crate) fn hint(mut self, hint: impl Into<String>) -> Self {
        self.hint = hint.into();
        self
    }
}

impl fmt::Display for Violation {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}", if self.path.is_empty() { "(vehicle)" } else { &self.path })?;
        if !self.value.is_empty() {
            write!(f, " = {}", self.value)?;
        }
        if !self.unit.is_empty() && self.unit != "1" {
            write!(f, " [{}]", self.unit)?;
        }
        write!(f, ": {}", self.rule)?;
        if !self.hint.is_empty() {
            write!(f, " ({})", self.hint)?;
        }
        Ok(())
    }
}

/// Everything this crate reports as an error.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum Error {
    /// The input breaks rules; all of them are listed, nothing was built.
    #[error("{}", list(violations))]
    InvalidInput {
        /// Every violation, ordered by path.
        violations: Vec<Violation>,
    },
    /// The text is not TOML or JSON.
    #[error("line {line}, column {column}: {message}")]
    Parse {
        /// Line, from 1.
        line: usize,
        /// Column, from 1.
        column: usize,
        /// What the parser met.
        message: String,
    },
    /// A matrix that must be regular is not.
    #[error("{matrix} is singular: {motion}")]
    Singular {
        /// Which matrix.
        matrix: String,
        /// The free or locked motion found.
        motion: String,
    },
    /// An iteration ended without a solution.
    #[error("{what} did not converge in {iterations} iterations (residual {residual:e})")]
    NotConverged {
        /// What was being solved.
        what: String,
        /// Iterations spent.
        iterations: usize,
        /// Residual of the last iterate.
        residual: f64,
        /// The last iterate.
        last: Vec<f64>,
    },
    /// A file could not be read or written.
    #[error("{path}: {cause}")]
    File {
        /// Path of the file.
        path: String,
        /// The system's message.
        cause: String,
        /// The system's error number, where there is one.
        code: Option<i32>,
    },
}

fn list(violations: &[Violation]) -> String {
    let mut text =
        format!("{} violation{} in the input:", violations.len(), if violations.len() == 1 { "" } else { "s" });
    for violation in violations {
        text.push_str("\n  ");
        text.push_str(&violation.to_string());
    }
    text
}

impl Error {
    /// The error's name, as a status.
    pub fn name(&self) -> &'static str {
        match self {
            Self::InvalidInput { .. } => "InvalidInput",
            Self::Parse { .. } => "ParseError",
            Self::Singular { .. } => "Singular",
            Self::NotConverged { .. } => "NotConverged",
            Self::File { .. } => "OSError",
        }
    }

    pub(crate) fn invalid(violation: Violation) -> Self {
        Self::InvalidInput { violations: vec![violation] }
    }
}

/// Result of this crate.
pub type Result<T> = std::result::Result<T, Error>;

/// `Ok` when there is nothing to complain about, else all violations ordered by path.
pub(crate) fn refuse(mut violations: Vec<Violation>) -> Result<()> {
    if violations.is_empty() {
        return Ok(());
    }
    violations.sort_by(|a, b| a.path.cmp(&b.path));
    Err(Error::InvalidInput { violations })
}
