//! A value computed once in the immutable value that owns it.

use std::sync::OnceLock;

/// Neither compared nor written nor copied: a clone computes its own.
#[derive(Debug)]
pub(crate) struct Cache<T>(OnceLock<T>);

impl<T> Cache<T> {
    pub(crate) fn get(&self, compute: impl FnOnce() -> T) -> &T {
        self.0.get_or_init(compute)
    }
}

impl<T> Default for Cache<T> {
    fn default() -> Self {
        Self(OnceLock::new())
    }
}

impl<T> Clone for Cache<T> {
    fn clone(&self) -> Self {
        Self::default()
    }
}

impl<T> PartialEq for Cache<T> {
    fn eq(&self, _: &Self) -> bool {
        true
    }
}
