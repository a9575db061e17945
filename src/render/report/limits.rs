//! What the model leaves out in this case, and cautions for safety.

use super::Material;
use super::html::escape;
use super::trust::number_of;
use crate::component::load::LoadLaw;
use crate::component::motor::MotorLaw;

/// Limits of the model that apply to this case, as safe HTML.
pub fn limits(material: &Material<'_>) -> Vec<String> {
    let scenario = material.scenario;
    let mut list = vec![
        "The train is bodies that turn about their axes, joined by torsion. Bending, axial and radial forces, \
         bearings, foundations and housings that give way are not in it."
            .to_owned(),
    ];
    let mut say = |applies: bool, text: &str| {
        if applies {
            list.push(text.to_owned());
        }
    };
    let magnets = scenario.magnetic_gears.len() + scenario.magnetic_couplings.len();
    let fields = || {
        let gears = scenario.magnetic_gears.iter().map(|gear| &gear.field);
        gears.chain(scenario.magnetic_couplings.iter().map(|coupling| &coupling.field))
    };
    say(
        magnets > 0,
        "The magnetic torque follows the load angle at once, by the static law given. The field's own delay, \
         saturation, eddy currents beyond the damping given, end effects and uneven air gaps are not in it.",
    );
    say(
        magnets > 0 && fields().all(|field| field.harmonics.is_empty()),
        "No harmonics of the torque law are given: torque over load angle is a pure sine.",
    );
    say(
        !scenario.magnetic_gears.is_empty()
            && scenario.magnetic_gears.iter().all(|gear| gear.cogging.is_empty()),
        "No cogging torque is given: torque ripple and what it may excite do not appear in the run.",
    );
    say(
        scenario.magnetic_gears.iter().any(|gear| gear.damping.is_none()),
        "A magnetic gear has no damping of its own here, so that its swings die away more slowly than real ones; \
         whether it falls back into step depends on that.",
    );
    say(
        scenario
            .magnetic_gears
            .iter()
            .any(|gear| gear.damping.is_some_and(|damping| damping.peak_at.is_none())),
        "The gear's damping grows in a straight line with slip speed, without end. Cages and eddy currents fade \
         beyond a peak: a return into step found with a straight line can be too good to be true.",
    );
    let gears = scenario.magnetic_gears.iter().map(|gear| &gear.field);
    let fields = gears.chain(scenario.magnetic_couplings.iter().map(|coupling| &coupling.field));
    let warming = fields.filter(|field| !field.warmth.is_steady()).count();
    say(
        magnets > warming,
        "The temperature of the magnets stays as given during the run; heating by losses and slips, and \
         demagnetisation, are not followed.",
    );
    say(
        warming > 0,
        "Magnets with thermal nodes warm up by their share of the gear's own losses, evenly inside and in still \
         surroundings; what they lose for good when they get too hot is not followed.",
    );
    say(
        material.result.gears.iter().any(|gear| gear.slips > 0),
        "The gear slips in this run. Figures after the first slip hang on the damping and on small differences of \
         the inputs more than figures before it.",
    );
    list.extend(drives(material));
    list
}

fn drives(material: &Material<'_>) -> Vec<String> {
    let scenario = material.scenario;
    let mut list = Vec::new();
    let mut say = |applies: bool, text: &str| {
        if applies {
            list.push(text.to_owned());
        }
    };
    let motor = |wanted: fn(&MotorLaw) -> bool| scenario.motors.iter().any(|it| wanted(&it.law));
    let load = |wanted: fn(&LoadLaw) -> bool| scenario.loads.iter().any(|it| wanted(&it.law));
    say(
        motor(|law| {
            matches!(
                law,
                MotorLaw::RatingPlate { .. }
                    | MotorLaw::Induction { .. }
                    | MotorLaw::Curve { .. }
                    | MotorLaw::InductionCircuit { transient: false, .. }
            )
        }),
        "A motor follows its curve of torque over speed. The torque pulses in the first periods of the mains after \
         switching, reversing or a voltage dip can be several times as large and are not in it.",
    );
    say(
        motor(|law| matches!(law, MotorLaw::InductionCircuit { .. })),
        "The motor follows its equivalent circuit with constant figures on a stiff, symmetrical line; skin effect, \
         saturation, iron loss and the arc of a contactor are not in it.",
    );
    say(
        motor(|law| matches!(law, MotorLaw::Induction { .. })),
        "The formula of breakdown torque and slip understates the starting torque of real cage motors.",
    );
    say(
        motor(|law| matches!(law, MotorLaw::SpeedLoop { .. } | MotorLaw::TorqueLoop { .. })),
        "The drive gives the torque it is asked for up to its limits; current loops, filters and voltage limits \
         of the converter are not in it, and its trips are those of the protections only.",
    );
    say(
        motor(|law| matches!(law, MotorLaw::Prescribed { .. }))
            || load(|law| matches!(law, LoadLaw::Prescribed { .. })),
        "A torque given over time does not react to the train: a real machine would give way or push back.",
    );
    say(
        load(|law| matches!(law, LoadLaw::PowerLaw { .. } | LoadLaw::Curve { .. })),
        "Loads follow their curves at once; the flow, belt or material behind them has no inertia beyond what is given.",
    );
    say(
        load(|law| matches!(law, LoadLaw::AxialRotor { .. })),
        "The rotor follows the flow at once by one curve of power over tip speed ratio and pitch; the wake, stall \
         in time and the flow over the disc are averaged.",
    );
    say(
        load(|law| matches!(law, LoadLaw::Propeller { .. })),
        "The propeller follows its open-water diagram at once and at the speed of advance as given; the ship does not \
         answer, the water it carries along is not in the inertia unless given there, and blade-rate pulses, cavitation \
         and reversing are not in it.",
    );
    say(
        load(|law| matches!(law, LoadLaw::Periodic { .. })),
        "The torque over a turn is the same at every speed and starts at the angle of the run's start; run the worst angles.",
    );
    say(
        load(|law| matches!(law, LoadLaw::Reciprocating { .. })),
        "The torque of a reciprocating mass is that of a crank at the speed of the moment: the part that follows its \
         acceleration is left out.",
    );
    say(
        !scenario.clutches.is_empty(),
        "Clutches lock and let go at once and rigidly; the wind-up of rollers and sprags, wear, and the fall of friction \
         with heat are not in them.",
    );
    say(
        !scenario.fluid_couplings.is_empty(),
        "Fluid couplings follow their curve of steady flow at once; filling, heating and the fluid's own inertia are not in it.",
    );
    say(
        load(|law| matches!(law, LoadLaw::Friction { .. })) || !scenario.brakes.is_empty(),
        "Dry friction has one sliding and one breakaway torque; wear, heat and the fall of friction with speed are not in it.",
    );
    say(
        !scenario.gear_pairs.is_empty() || !scenario.planetary_gears.is_empty(),
        "Toothed gears are rigid and without play, meshing forces and losses that grow with the load; only a drag that is given is in them.",
    );
    let rigid = scenario.shafts.iter().filter(|shaft| shaft.rigid).count();
    if rigid > 0 {
        list.push(format!(
            "{} rigid: the torque in it is what the bodies need to turn as one, and its own mode does not exist here.",
            number_of(rigid, "shaft is", "shafts are")
        ));
    }
    if scenario.shafts.iter().any(|shaft| shaft.backlash > 0.0) {
        list.push(
            "Flanks that meet through play do not rebound beyond what stiffness and damping give; peaks at contact \
             hang on the damping, which is seldom known well."
                .to_owned(),
        );
    }
    list.iter().map(|text| escape(text)).collect()
}

/// Cautions for safety, as safe HTML.
pub fn cautions(material: &Material<'_>) -> Vec<String> {
    let mut list = vec![
        "This is a calculation, not a certificate. It holds for the inputs above and no others.".to_owned(),
        "<b>When a magnetic gear slips, the load is no longer held or driven.</b> Hoists and inclined conveyors can \
         run back, the rotors of turbines can overspeed, and a driven machine can stop while its motor runs on."
            .to_owned(),
        "A magnetic gear or coupling is not a safety-rated torque limiter and not a brake. Do not count on it to slip \
         at a certain torque, nor to hold."
            .to_owned(),
        "Once it slips it may not lock again before the torque falls below the re-synchronisation torque, which can be \
         a small part of the pull-out torque. Detect slip and trip on it."
            .to_owned(),
        "A hard stop or an emergency brake may itself make the gear slip: check the stop as a case of its own."
            .to_owned(),
        "State temperature and tolerances with every figure: hot magnets pull less, and a gear as built differs from \
         its drawing. Pull-out at the highest magnet temperature decides."
            .to_owned(),
        "Fit guards, brakes and stops that are rated for the duty, and follow the codes of the place of use.".to_owned(),
        "A licensed engineer who knows the plant decides; this page helps and does not decide.".to_owned(),
    ];
    if material.scenario.brakes.is_empty() {
        list.push("There is no brake in this train: nothing in this calculation holds it when the gear lets go.".to_owned());
    }
    list
}
