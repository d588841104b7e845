fn main() {
    let car = ridemodes::Vehicle::load(std::env::args().nth(1).unwrap());
    let car = match car { Ok(c) => c, Err(e) => { println!("{e}"); return; } };
    let point = car.settle().unwrap();
    println!("{:#?}", point.warnings);
    println!("oil {:?} spring {:?}", point.oil_load, point.spring_load);
    let lin = point.linear().unwrap();
    println!("{:?}", lin.coordinates());
    println!("{}\n{}\n{}\n{}\n{}", car.table(), point.tables(), lin.table(), lin.coupling_table().unwrap(), lin.modes().unwrap().table()); println!("{}", lin.motions().unwrap().tables());
    for kind in [ridemodes::ModeKind::Undamped, ridemodes::ModeKind::Locked, ridemodes::ModeKind::Damped] {
        let m = lin.modes_of(kind).unwrap();
        for i in 0..m.len() { println!("{:14} {:9.4} Hz  {:8.4} {:?} {:?}", m.label[i], m.frequency[i], m.damping_ratio[i], m.unclear[i], m.share.row(i).iter().map(|v| (v*1000.0).round()/10.0).collect::<Vec<_>>()); }
    }
    let mo = lin.motions().unwrap();
    println!("{}{}{:?} {:?} {:?} {} {} {}", mo.stiffness.total, mo.damping.total, mo.roll, mo.roll_oil, mo.ride_frequency, mo.bounce_centre, mo.pitch_centre, mo.warp_to_roll);
    println!("{:?}", mo.warnings);
    let d = lin.dynamic_coupling(&[1e-4, 5.0]).unwrap();
    println!("{:?}", d);
}
