//! The laws of a stretch laid out for speed: what the right-hand side walks through.
//!
//! One matrix `[A D]` of a padded, even height takes the state and the values of the laws to the
//! rates. The values are worked out first, so that the rates stay in registers while the columns
//! are summed. The laws met most often stand in line; all others go through the library of laws.

use crate::component::law::Law;
use crate::component::load::power_law::PowerLaw;
use crate::component::motor::induction::Induction;
use crate::equations::assembly::{Active, DENSE_LIMIT, Function, Matrix, Strength};
use crate::equations::frame::Evaluator;

/// How the value of a law comes about.
#[derive(Clone, Copy, Debug)]
enum Kernel {
    /// Sine of the input.
    Sine,
    /// Induction motor.
    Induction(Induction),
    /// Power of the speed, in one of its pieces.
    PowerLaw(PowerLaw, usize),
    /// The factor alone.
    Constant,
    /// The input itself.
    Input,
    /// The factor alone, and it follows signals.
    Followed,
    /// Any other law of one state that follows no signal.
    Steady,
    /// A law of several states, or one that follows signals.
    Other,
}

/// One law in line: its value is `factor*kernel(input)`.
#[derive(Clone, Copy, Debug)]
struct Line {
    kernel: Kernel,
    place: usize,
    slope: f64,
    offset: f64,
    factor: f64,
}

/// All laws of an assembly, and its matrix when that is dense.
#[derive(Debug)]
pub struct Flat {
    /// Height of the columns: the state's length, padded to an even one.
    pub width: usize,
    columns: Vec<f64>,
    lines: Vec<Line>,
}

impl Flat {
    /// Lays out the laws of an evaluator's assembly.
    pub fn new(evaluator: &Evaluator<'_>) -> Self {
        let assembly = evaluator.assembly;
        let size = evaluator.equations.size;
        let width = size.next_multiple_of(2);
        let mut columns = Vec::new();
        if let Matrix::Dense(dense) = &assembly.matrix {
            columns = vec![0.0; width * (width + assembly.active.len())];
            for (place, column) in dense.chunks_exact(size.max(1)).enumerate() {
                columns[place * width..place * width + size].copy_from_slice(column);
            }
            for (index, active) in assembly.active.iter().enumerate() {
                for &(row, factor) in &active.column {
                    columns[(width + index) * width + row] += factor;
                }
            }
        }
        Self { width, columns, lines: assembly.active.iter().map(line).collect() }
    }

    /// Values of all laws at a time and state.
    #[inline(always)]
    pub fn values(&self, evaluator: &Evaluator<'_>, time: f64, state: &[f64], values: &mut [f64]) {
        for (index, (line, slot)) in self.lines.iter().zip(values.iter_mut()).enumerate() {
            let input = state[line.place] * line.slope + line.offset;
            let value = match line.kernel {
                Kernel::Sine => input.sin(),
                Kernel::Induction(motor) => motor.value(input),
                Kernel::PowerLaw(load, piece) => load.value(input, piece),
                Kernel::Constant => 1.0,
                Kernel::Input => input,
                Kernel::Followed => {
                    evaluator.strength(&evaluator.assembly.active[index].factor, time)
                }
                Kernel::Steady => steady(&evaluator.assembly.active[index], input),
                Kernel::Other => evaluator.law(&evaluator.assembly.active[index], time, state).1,
            };
            *slot = line.factor * value;
        }
    }

    /// Rates from state and values by the dense matrix.
    #[inline(always)]
    pub fn rates(&self, state: &[f64], values: &[f64], rates: &mut [f64]) {
        let width = self.width;
        if rates.len() == width && state.len() == rates.len() {
            // Plain counted loops: with a length known to the compiler they unroll. Two sums a
            // row, since a chain of additions takes longer than the additions.
            let size = rates.len();
            let (own, laws) = self.columns.split_at(size * size);
            let (upper, lower) = own.split_at(size / 2 * size);
            let (mut first, mut second) = ([0.0; DENSE_LIMIT], [0.0; DENSE_LIMIT]);
            let (first, second) = (&mut first[..size], &mut second[..size]);
            for (column, value) in upper.chunks_exact(size).zip(&state[..size / 2]) {
                for row in 0..size {
                    first[row] += column[row] * value;
                }
            }
            for (column, value) in lower.chunks_exact(size).zip(&state[size / 2..]) {
                for row in 0..size {
                    second[row] += column[row] * value;
                }
            }
            for row in 0..size {
                first[row] += second[row];
            }
            for (column, value) in laws.chunks_exact(size).zip(values) {
                for row in 0..size {
                    first[row] += column[row] * value;
                }
            }
            rates.copy_from_slice(first);
        } else {
            rates.fill(0.0);
            let own = self.columns.chunks_exact(width).take(width).zip(state);
            let laws = self.columns.chunks_exact(width).skip(width).zip(values);
            for (column, value) in own.chain(laws) {
                for (rate, factor) in rates.iter_mut().zip(column) {
                    *rate += factor * value;
                }
            }
        }
    }
}

fn line(active: &Active) -> Line {
    let (kernel, scale) = kernel(active);
    let factor = match (kernel, &active.factor) {
        (Kernel::Other | Kernel::Followed, _) | (_, Strength::Varying(_)) => 1.0,
        (_, Strength::Constant(value)) => value * scale,
    };
    let (place, slope) = active.input.first().copied().unwrap_or((0, 0.0));
    Line { kernel, place, slope, offset: active.fixed.0, factor }
}

/// The kernel of a term and what its factor is multiplied with.
fn kernel(active: &Active) -> (Kernel, f64) {
    let by_state = active.by_state.iter().any(|form| !form.is_empty());
    if active.follows_time || active.input.len() > 1 || by_state {
        let alone = matches!(active.function, Function::Law(Law::Unit, _));
        return (if alone { Kernel::Followed } else { Kernel::Other }, 1.0);
    }
    match &active.function {
        Function::Law(Law::Magnet(law), _) => match law.sine() {
            Some(amplitude) => (Kernel::Sine, amplitude),
            None => (Kernel::Steady, 1.0),
        },
        Function::Law(Law::Induction(motor), _) => (Kernel::Induction(*motor), 1.0),
        Function::Law(Law::PowerLaw(load), piece) => (Kernel::PowerLaw(*load, *piece), 1.0),
        Function::Law(Law::Unit, _) => (Kernel::Constant, 1.0),
        Function::Law(..) => (Kernel::Steady, 1.0),
        Function::Products(_) | Function::Warm(..) | Function::Pair(..) => (Kernel::Other, 1.0),
        Function::Linear => (Kernel::Input, 1.0),
        Function::Friction(torque, direction) => (Kernel::Constant, -direction * torque),
    }
}

/// The value of a law that follows no signal, without its factor.
fn steady(active: &Active, input: f64) -> f64 {
    match &active.function {
        Function::Law(law, piece) => law.value(input, active.fixed.1, *piece),
        Function::Linear | Function::Products(_) | Function::Warm(..) | Function::Pair(..) => input,
        Function::Friction(torque, direction) => -direction * torque,
    }
}
