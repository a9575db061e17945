//! Scalar laws: one smooth function of one input within each of its pieces.
//!
//! Everything of a train that is not linear is a scalar law `q = factor(t) * f(x, p, piece)`:
//! the magnet's torque over its phase, a motor's over its speed. `p` are up to two parameters
//! that follow signals (flow and pitch of a rotor). Where `f` has a corner, the input axis
//! is cut into pieces; within a piece `f` is smooth and may be evaluated a little beyond the
//! piece's ends, so that an integrator's trial steps see no corner. The piece is an explicit
//! argument, never hidden state; the integrator stops where the input crosses a boundary.
