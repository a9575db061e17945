//! The command line program.

fn main() {
    let path = std::env::args().nth(1).unwrap_or_default();
    let loaded = match lodeshaft::scenario::load(std::path::Path::new(&path), &[]) {
        Ok(loaded) => loaded,
        Err(failure) => {
            println!("{}", failure.render());
            return;
        }
    };
    let model = match lodeshaft::model::build(&loaded.scenario) {
        Ok(model) => model,
        Err(found) => {
            println!("{found:?}");
            return;
        }
    };
    let equations = lodeshaft::equations::build::build(&model);
    let clock = std::time::Instant::now();
    let result = lodeshaft::solve::run::run(&equations, lodeshaft::solve::RunOptions::default());
    println!("{:?}", clock.elapsed());
    match result {
        Ok(result) => {
            println!("{:#?}", result.gears);
            for c in &result.channels {
                println!("{:30} {:?} {:14.6e} @{:.4} {:14.6e} @{:.4} last {:14.6e}", c.name, c.unit, c.min, c.min_time, c.max, c.max_time, c.last);
            }
            println!("{:#?} {:?} {:?} {:?}", result.requirements, result.energy, result.motors, result.solver);
            println!("{:?} {:?}", result.failure, result.warnings);
            for e in result.events.iter().take(20) { println!("{e:?}"); }
        }
        Err(e) => println!("{e:?}"),
    }
}
