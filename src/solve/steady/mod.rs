//! The steady start: the stable operating point nearest to the given speeds.
//!
//! ```text
//! u = Z v                 synchronous motion: all slip speeds and twist rates zero
//! Z' tau(Z v) = 0         torque balance of the train turning as one
//! D' f = tau              torque of each shaft and magnet from the balance of the bodies
//! x = f^-1                twists and phases on the stable branch, short of the peak
//! ```
//! Friction at rest holds where its breakaway suffices; a controller with an integral part
//! holds its speed within its limit; torques over an angle count by their mean over a turn.

mod balance;
mod external;
mod several;

use crate::component::law::Law;
use crate::equations::assembly::assemble;
use crate::equations::frame::Evaluator;
use crate::equations::linearise::{MagnetSlope, eigenvalues, jacobian};
use crate::equations::mode::{FrictionMode, Mode};
use crate::equations::{Equations, Shape, thermal};
use crate::signal::course::Overrides;
use balance::Balance;
use external::External;
use nalgebra::{DMatrix, DVector};

/// Growth rates up to this share of the fastest mode are rounding.
const GROWTH_TOLERANCE: f64 = 1e-7;

/// Accelerations at an operating point, relative to the torques at work, that still count as none.
const BALANCE_TOLERANCE: f64 = 1e-8;

/// An operating point.
#[derive(Clone, Debug)]
pub struct SteadyPoint {
    /// Scaled state.
    pub state: Vec<f64>,
    /// Mode there.
    pub mode: Mode,
}

/// Why there is no steady start.
#[derive(Clone, Debug, PartialEq)]
pub struct SteadyError {
    /// The reason in words.
    pub message: String,
}

impl SteadyError {
    fn new(message: impl Into<String>) -> Self {
        Self { message: message.into() }
    }
}

/// Finds the stable operating point nearest to the given speeds, with signals as at `time`.
///
/// # Errors
/// Names the reason: no torque balance (which member, how much is missing), more than a
/// magnet's pull-out needed, or an unstable point with its growth rate.
pub fn find(
    equations: &Equations,
    time: f64,
    overrides: &Overrides,
) -> Result<SteadyPoint, SteadyError> {
    let rates = deformation_rates(equations);
    let motions = kernel(&rates, equations);
    let start = DVector::from_iterator(
        equations.speeds,
        equations
            .model
            .reduction
            .independent
            .iter()
            .map(|body| equations.model.start_speeds[*body]),
    );
    let balance = Balance::find(equations, &motions, &start, time, overrides)?;
    let deformations = deform(equations, &rates, &balance)?;
    let mut state = vec![0.0; equations.size];
    for place in 0..equations.speeds {
        state[place] = balance.speeds[place] / equations.scale[place];
    }
    for (place, value) in &deformations {
        state[*place] = value / equations.scale[*place];
    }
    let external = External { equations, time, overrides };
    for (index, controller) in equations.controllers.iter().enumerate() {
        let torque = balance.command[index];
        if let Some(place) = controller.integral_state {
            state[place] = (torque - external.feed_forward(index)) / equations.scale[place];
        }
        if let Some(place) = controller.torque_state {
            state[place] = torque / equations.scale[place];
        }
    }
    for (index, pitch) in equations.pitches.iter().enumerate() {
        let angle = balance.command[equations.controllers.len() + index];
        for place in [pitch.state, pitch.integral_state] {
            state[place] = angle / equations.scale[place];
        }
    }
    // Magnets warm up over minutes: the motion is in balance at the temperatures of the start.
    for node in &equations.thermal {
        state[node.place] = node.start / equations.scale[node.place];
    }
    for machine in &equations.machines {
        machine.settle(&mut state, &equations.scale, external.machine_voltage(machine));
    }
    let mut mode = Mode::of_state(equations, time, &state, overrides);
    for (index, holding) in balance.at_rest.iter().enumerate() {
        mode.frictions[index] = match holding {
            Some(_) => FrictionMode::Stuck,
            None => mode.frictions[index],
        };
    }
    super::rest::presence(equations, &mut mode, time, f64::INFINITY, &state, overrides);
    check(equations, &mode, &state, time, overrides, &balance)?;
    Ok(SteadyPoint { state, mode })
}

/// Motions of the train in synchronism, in which no shaft twists and no magnet slips: one column
/// of independent speeds for each.
pub fn motions(equations: &Equations) -> DMatrix<f64> {
    kernel(&deformation_rates(equations), equations)
}

/// Rate rows of all deformations over the independent speeds, and their states.
fn deformation_rates(equations: &Equations) -> Vec<(usize, DVector<f64>)> {
    let reduction = &equations.model.reduction;
    let shafts = equations.model.shafts.iter().zip(&equations.twist_state);
    let twists = shafts
        .filter_map(|(shaft, place)| place.map(|place| (place, reduction.dense(&shaft.row()))));
    let magnets = equations.model.magnets.iter().zip(&equations.phase_state);
    let phases = magnets.map(|(magnet, place)| (*place, reduction.dense(&magnet.row())));
    twists.chain(phases).collect()
}

/// Motions in which nothing deforms: the kernel of the rate rows, one column a motion.
fn kernel(rates: &[(usize, DVector<f64>)], equations: &Equations) -> DMatrix<f64> {
    let count = equations.speeds;
    // Rows and columns are brought to working size, so that the rank is judged fairly.
    let mut gram = DMatrix::zeros(count, count);
    for (_, row) in rates {
        let scaled = DVector::from_fn(count, |place, _| row[place] * equations.scale[place]);
        let size = scaled.amax();
        if size > 0.0 {
            gram += &scaled * scaled.transpose() / (size * size);
        }
    }
    let eigen = gram.symmetric_eigen();
    let largest = eigen.eigenvalues.amax().max(f64::MIN_POSITIVE);
    let columns: Vec<DVector<f64>> = eigen
        .eigenvalues
        .iter()
        .enumerate()
        .filter(|(_, value)| rates.is_empty() || **value <= 1e-12 * largest)
        .map(|(place, _)| {
            let vector = eigen.eigenvectors.column(place);
            DVector::from_fn(count, |row, _| vector[row] * equations.scale[row])
        })
        .collect();
    DMatrix::from_fn(count, columns.len(), |row, column| columns[column][row])
}

/// Twists and phases under the torques of a balance.
fn deform(
    equations: &Equations,
    rates: &[(usize, DVector<f64>)],
    balance: &Balance,
) -> Result<Vec<(usize, f64)>, SteadyError> {
    if rates.is_empty() {
        return Ok(Vec::new());
    }
    let matrix =
        DMatrix::from_fn(equations.speeds, rates.len(), |row, column| rates[column].1[row]);
    let svd = matrix.clone().svd(true, true);
    let torque = svd
        .solve(&balance.torque, 1e-12)
        .map_err(|_| SteadyError::new("the torques of shafts and magnets cannot be found"))?;
    let mut values: Vec<f64> = Vec::with_capacity(rates.len());
    for (index, (place, _)) in rates.iter().enumerate() {
        values.push(undeform(equations, *place, torque[index])?);
    }
    // Parallel paths: the torques share so that the deformations fit one set of angles.
    if rates.len() > svd.rank(1e-10) {
        settle_parallel(equations, rates, &matrix, balance, &mut values)?;
    }
    Ok(rates.iter().map(|(place, _)| *place).zip(values).collect())
}

/// The deformation at which an element carries a torque along its rate row.
fn undeform(equations: &Equations, place: usize, torque: f64) -> Result<f64, SteadyError> {
    if let Some(index) = equations.twist_state.iter().position(|state| *state == Some(place)) {
        let shaft = &equations.model.shafts[index];
        if let Some(curve) = &shaft.curve {
            return Ok(curve.twist(torque));
        }
        let play = if torque == 0.0 { 0.0 } else { shaft.backlash / 2.0 * torque.signum() };
        return Ok(torque / shaft.stiffness + play);
    }
    let Some(index) = equations.phase_state.iter().position(|state| *state == place) else {
        return Ok(0.0);
    };
    let magnet = &equations.model.magnets[index];
    let share = torque / magnet.amplitude;
    let [low, high] = magnet.law.peak_values();
    magnet.law.stable_angle_for(share).ok_or_else(|| {
        let of_peak = if share >= 0.0 { share / high } else { share / low };
        SteadyError::new(format!(
            "needs {} % of the pull-out of `{}`",
            crate::quantity::format_number(100.0 * of_peak, 4),
            magnet.name
        ))
    })
}

/// The torque of an element at a deformation, and its slope.
fn element(equations: &Equations, place: usize, value: f64) -> (f64, f64) {
    if let Some(index) = equations.twist_state.iter().position(|state| *state == Some(place)) {
        let shaft = &equations.model.shafts[index];
        if let Some(curve) = &shaft.curve {
            return curve.at(value);
        }
        let beyond = value.abs() - shaft.backlash / 2.0;
        if beyond <= 0.0 {
            return (0.0, 1e-6 * shaft.stiffness);
        }
        return (shaft.stiffness * beyond.copysign(value), shaft.stiffness);
    }
    for term in &equations.terms {
        if let (Shape::Law(Law::Magnet(law)) | Shape::Warm(Law::Magnet(law), _), [(state, _)]) =
            (&term.shape, term.input.as_slice())
            && *state == place
        {
            return (law.value(value), law.slope(value).max(1e-6 * law.amplitude()));
        }
    }
    (0.0, 1.0)
}

fn settle_parallel(
    equations: &Equations,
    rates: &[(usize, DVector<f64>)],
    matrix: &DMatrix<f64>,
    balance: &Balance,
    values: &mut [f64],
) -> Result<(), SteadyError> {
    // Unknown: angles a of the independent coordinates; deformation x = D a (all start unloaded).
    let rows = matrix.transpose();
    let mut angles = rows
        .clone()
        .svd(true, true)
        .solve(&DVector::from_column_slice(values), 1e-12)
        .map_err(|_| SteadyError::new("the angles of parallel paths cannot be found"))?;
    for _ in 0..100 {
        let deformed = &rows * &angles;
        let mut residual = balance.torque.clone();
        let mut stiffness = DMatrix::zeros(equations.speeds, equations.speeds);
        for (index, (place, row)) in rates.iter().enumerate() {
            let (torque, slope) = element(equations, *place, deformed[index]);
            residual -= row * torque;
            stiffness += row * row.transpose() * slope;
        }
        let size = balance.torque.amax().max(f64::MIN_POSITIVE);
        if residual.amax() <= 1e-13 * size {
            break;
        }
        let Ok(step) = stiffness.svd(true, true).solve(&residual, 1e-12) else { break };
        angles += step;
    }
    let deformed = &rows * &angles;
    for (value, settled) in values.iter_mut().zip(deformed.iter()) {
        *value = *settled;
    }
    Ok(())
}

/// An operating point must be in balance and must not grow away from itself.
fn check(
    equations: &Equations,
    mode: &Mode,
    state: &[f64],
    time: f64,
    overrides: &Overrides,
    balance: &Balance,
) -> Result<(), SteadyError> {
    let assembly = assemble(equations, mode, time, f64::INFINITY, overrides);
    let evaluator = Evaluator { equations, assembly: &assembly, overrides };
    let rhs = crate::solve::rhs::Rhs::new(evaluator);
    let mut rates = vec![0.0; equations.size];
    rhs.system(time, state, &mut rates);
    // A controller that idles at its speed still has the rounding of its own error.
    let rounding: f64 = equations.controllers.iter().map(|controller| controller.limit).sum();
    let at_work = balance.at_work + 1e-4 * rounding;
    let inverse = &equations.model.reduction.inverse_mass;
    for place in 0..equations.speeds {
        let acceleration = rates[place] * equations.scale[place];
        let at_work = at_work * inverse[(place, place)];
        // Cogging counts by its mean, so it is left out of what must balance here.
        if acceleration.abs() > BALANCE_TOLERANCE * at_work && !has_cogging(equations) {
            let body = equations.model.reduction.independent[place];
            let name = &equations.model.scenario.bodies[body].name;
            return Err(SteadyError::new(format!(
                "no torque balance: {:.6} N*m are missing at `{name}`",
                acceleration / inverse[(place, place)]
            )));
        }
    }
    let mut matrix = jacobian(&evaluator, time, state, MagnetSlope::AtState);
    thermal::hold(equations, &mut matrix);
    let Some(values) = eigenvalues(&matrix) else { return Ok(()) };
    let fastest = values.iter().fold(0.0_f64, |size, (re, im)| size.max(re.hypot(*im)));
    let growth = values.iter().fold(0.0_f64, |growth, (re, _)| growth.max(*re));
    if growth > GROWTH_TOLERANCE * fastest {
        return Err(SteadyError::new(format!(
            "unstable: a deviation grows at {growth:.6} 1/s (doubles in {:.4} s)",
            2.0_f64.ln() / growth
        )));
    }
    Ok(())
}

fn has_cogging(equations: &Equations) -> bool {
    !equations.angle_states.is_empty()
}
