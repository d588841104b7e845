//! From a vehicle file to its coupled modes, in Rust.
//!
//! `cargo run --release --example modes` takes the roadster; give a path to take another vehicle.

use ridemodes::{CAUTION, Error, Vehicle};

fn main() -> Result<(), Error> {
    let car = match std::env::args().nth(1) {
        Some(path) => Vehicle::load(path)?,
        None => Vehicle::example("roadster")?,
    };
    let state = car.settle()?;
    let lin = state.linear()?;
    println!("{}\n{}\n{}\n{}", state.tables(), lin.coupling_table()?, lin.motions()?.tables(), lin.modes()?.table());
    println!("{CAUTION}");
    Ok(())
}
