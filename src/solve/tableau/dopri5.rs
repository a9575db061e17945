//! Coefficients of the method of Dormand and Prince of order 5(4) with dense output of order 4.
//!
//! Source: Dormand and Prince, J. Comp. Appl. Math. 6 (1980) 19-26; dense output: Hairer, Norsett
//! and Wanner, *Solving Ordinary Differential Equations I*, second edition (1993), section II.6.

/// Rows 2 to 6 of the matrix; row 7 is the solution.
pub const A: [&[f64]; 5] = [
    &[1.0 / 5.0],
    &[3.0 / 40.0, 9.0 / 40.0],
    &[44.0 / 45.0, -56.0 / 15.0, 32.0 / 9.0],
    &[19372.0 / 6561.0, -25360.0 / 2187.0, 64448.0 / 6561.0, -212.0 / 729.0],
    &[9017.0 / 3168.0, -355.0 / 33.0, 46732.0 / 5247.0, 49.0 / 176.0, -5103.0 / 18656.0],
];

/// Weights of the solution.
pub const B: [f64; 6] =
    [35.0 / 384.0, 0.0, 500.0 / 1113.0, 125.0 / 192.0, -2187.0 / 6784.0, 11.0 / 84.0];

/// Nodes of stages 1 to 6.
pub const C: [f64; 6] = [0.0, 1.0 / 5.0, 3.0 / 10.0, 4.0 / 5.0, 8.0 / 9.0, 1.0];

/// Weights of the dense output, stages 1 to 7.
pub const D: [f64; 7] = [
    -12715105075.0 / 11282082432.0,
    0.0,
    87487479700.0 / 32700410799.0,
    -10690763975.0 / 1880347072.0,
    701980252875.0 / 199316789632.0,
    -1453857185.0 / 822651844.0,
    69997945.0 / 29380423.0,
];
