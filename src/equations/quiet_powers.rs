//! Powers that stand in no law: dampers of shafts, magnets and bodies.

use super::mode::{Contact, Mode};
use super::{Equations, Owner, StateRow};

/// Powers that follow from the state without a law.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct QuietPowers {
    /// Lost: weight times the square of a state's scaled rate (deformation rates).
    pub rate_losses: Vec<(usize, f64)>,
    /// Lost: weight times the square of a form.
    pub losses: Vec<(f64, StateRow)>,
    /// Power of loads and motors that are linear: weight times the product of two forms.
    pub drives: Vec<(f64, StateRow, StateRow)>,
}

/// The powers of a mode.
pub(super) fn quiet_powers(equations: &Equations, mode: &Mode) -> QuietPowers {
    let mut powers = QuietPowers::default();
    for (index, (shaft, place)) in
        equations.model.shafts.iter().zip(&equations.twist_state).enumerate()
    {
        let Some(place) = *place else { continue };
        let scale = equations.scale[place];
        match mode.contacts[index] {
            Contact::Gap => {}
            _ if shaft.damping > 0.0 => {
                powers.rate_losses.push((place, shaft.damping * scale * scale));
            }
            _ => {}
        }
    }
    for damper in &equations.dampers {
        let row = equations.speed_row(&damper.row);
        if let Owner::Magnet(index) = damper.owner
            && damper.row == equations.model.magnets[index].row()
        {
            let place = equations.phase_state[index];
            powers.rate_losses.push((place, damper.coefficient * equations.scale[place].powi(2)));
            continue;
        }
        powers.losses.push((damper.coefficient, row));
    }
    powers
}
