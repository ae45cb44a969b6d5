//! Computes the data that the closed form of the critical Weber number rests on.
//!
//! ```text
//! separation-experiment design                         print the designed runs
//! separation-experiment run DATA.csv [options]         compute those not yet in DATA.csv, appending a row for each
//! separation-experiment repeat EARLIER.csv DATA.csv    repeat earlier runs of another program
//!   --cells N      cells per thickness (default 16; up to 8 more, and a denser gas, if the run diverges)
//!   --tolerance X  width of the bracket (default 0.08)
//!   --last N       stop after run N
//!   --pause FILE   wait while FILE exists
//! ```
//! Stop it at any time; started again, it goes on with the first run that has no row.
#![allow(clippy::print_stdout)]

mod design;
mod row;

use std::collections::BTreeSet;
use std::error::Error;
use std::fs::{File, OpenOptions, read_to_string};
use std::io::Write as _;
use std::path::{Path, PathBuf};
use std::sync::atomic::AtomicBool;
use std::time::{Duration, Instant};

use design::{Case, RUNS, SEED, case};
use dribble_risk::physics::separation::free_surface::outcome::{Onset, Reason};
use dribble_risk::physics::separation::free_surface::ramp::{Plan, Watch, critical_weber};

/// Options of the command line.
struct Options {
    cells: Option<u32>,
    tolerance: f64,
    last: usize,
    pause: Option<PathBuf>,
}

fn main() -> Result<(), Box<dyn Error>> {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let words: Vec<&str> = arguments.iter().map(String::as_str).collect();
    match words.as_slice() {
        ["design"] => {
            println!("# seed {SEED}\n{}", row::DESIGN_HEADER);
            for run in 0..RUNS {
                println!("{}", row::design(&case(run)));
            }
            Ok(())
        }
        ["run", data, options @ ..] => {
            let options = parse(options)?;
            let cases: Vec<Case> = (0..RUNS).map(case).collect();
            compute(&cases, Path::new(data), &options)
        }
        ["repeat", earlier, data, options @ ..] => {
            let options = parse(options)?;
            let cases = row::read_earlier(&read_to_string(earlier)?)?;
            compute(&cases, Path::new(data), &options)
        }
        _ => Err("say `design`, `run DATA.csv` or `repeat EARLIER.csv DATA.csv`".into()),
    }
}

fn parse(words: &[&str]) -> Result<Options, Box<dyn Error>> {
    let mut options = Options { cells: None, tolerance: 0.08, last: usize::MAX, pause: None };
    for pair in words.chunks(2) {
        match pair {
            ["--cells", value] => options.cells = Some(value.parse()?),
            ["--tolerance", value] => options.tolerance = value.parse()?,
            ["--last", value] => options.last = value.parse()?,
            ["--pause", value] => options.pause = Some(PathBuf::from(value)),
            other => return Err(format!("unknown option {other:?}").into()),
        }
    }
    Ok(options)
}

/// Computes the cases that have no row yet.
fn compute(cases: &[Case], data: &Path, options: &Options) -> Result<(), Box<dyn Error>> {
    let done: BTreeSet<String> = match read_to_string(data) {
        Ok(text) => text.lines().filter_map(|line| line.split(',').next()).map(str::to_owned).collect(),
        Err(_) => {
            let mut file = File::create(data)?;
            writeln!(file, "{}", row::RESULT_HEADER)?;
            BTreeSet::new()
        }
    };
    let never = AtomicBool::new(false);
    let pause = || {
        while options.pause.as_deref().is_some_and(Path::exists) {
            std::thread::sleep(Duration::from_secs(2));
        }
    };
    for case in cases.iter().filter(|case| case.run <= options.last && !done.contains(&case.run.to_string()))
    {
        let problem = case.problem()?;
        let started = Instant::now();
        let watch = Watch { cancel: &never, progress: &|_| pause() };
        let cells = options.cells.unwrap_or(16);
        // A run that diverges is tried with a denser gas, then on finer grids.
        let tries = [(cells, 0.01), (cells, 0.02), (cells + 4, 0.02), (cells + 8, 0.02)].into_iter();
        let mut last = None;
        for (cells, density_ratio) in tries {
            let mut plan = Plan::with_cells(&problem, cells, 1)?;
            plan.grid.density_ratio = density_ratio;
            plan.tolerance = options.tolerance;
            plan.budget = f64::INFINITY;
            let search = critical_weber::<f32>(&problem, &plan, watch)?;
            let diverged = matches!(search.onset, Onset::NotConverged { reason: Reason::Diverged, .. });
            last = Some((search, density_ratio));
            if !diverged {
                break;
            }
        }
        let Some((search, density_ratio)) = last else { continue };
        let line = row::result(case, &search, density_ratio, started.elapsed().as_secs_f64());
        let mut file = OpenOptions::new().append(true).open(data)?;
        writeln!(file, "{line}")?;
    }
    Ok(())
}
