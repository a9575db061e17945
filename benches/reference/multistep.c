/* The pump train of `benches/pump_train.yaml` by CVODE, a multistep solver in C.
 *
 * multistep METHOD TOLERANCE DURATION EVERY RIPPLE
 *
 * METHOD is adams (fixed-point iteration) or bdf (Newton, dense). Prints the seconds that the
 * integration took, the calls of the right-hand side, and one line of states each EVERY seconds.
 * Relative deformations and scaled states as in the program, so that one tolerance means the same.
 */
#include <cvode/cvode.h>
#include <math.h>
#include <nvector/nvector_serial.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sunlinsol/sunlinsol_dense.h>
#include <sunmatrix/sunmatrix_dense.h>
#include <sunnonlinsol/sunnonlinsol_fixedpoint.h>
#include <time.h>

#define STATES 7
static const double scale[STATES] = {157.08, 157.08, 28.56, 28.56, 0.02, 0.04, 1.0};
static double ripple;

static int rates(realtype t, N_Vector state, N_Vector rate, void *data)
{
    (void)data;
    const double *y = N_VGetArrayPointer(state);
    double *dy = N_VGetArrayPointer(rate);
    double wm = y[0] * scale[0], wi = y[1] * scale[1], wo = y[2] * scale[2], wp = y[3] * scale[3];
    double tm = y[4] * scale[4], tp = y[5] * scale[5], phase = y[6];
    double slip = 1.0 - wm / (50.0 * M_PI);
    double motor = 2.0 * 416.0 * slip * 0.13 / (slip * slip + 0.13 * 0.13);
    double motor_shaft = 20000.0 * tm + 2.0 * (wm - wi);
    double pump_shaft = 50000.0 * tp + 5.0 * (wo - wp);
    double phase_rate = 4.0 * wi + 22.0 * wo;
    double magnet = 1500.0 / 22.0 * sin(phase) + 24.2 / 484.0 * phase_rate;
    double w = 267.0 * M_PI / 30.0;
    double pump = 700.0 * wp * fabs(wp) / (w * w);
    dy[0] = (motor - motor_shaft - 0.01 * wm) / 0.25 / scale[0];
    dy[1] = (motor_shaft - 4.0 * magnet) / 0.02 / scale[1];
    dy[2] = (-22.0 * magnet - pump_shaft) / 0.15 / scale[2];
    dy[3] = (pump_shaft - pump + ripple * sin(2.0 * M_PI * 5.0 * t)) / 2.5 / scale[3];
    dy[4] = (wm - wi) / scale[4];
    dy[5] = (wo - wp) / scale[5];
    dy[6] = phase_rate;
    return 0;
}

static double now(void)
{
    struct timespec t;
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
    return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(int count, char **words)
{
    if (count != 6) return 2;
    int bdf = strcmp(words[1], "bdf") == 0;
    double tolerance = atof(words[2]), duration = atof(words[3]), every = atof(words[4]);
    ripple = atof(words[5]);
    SUNContext context;
    if (SUNContext_Create(NULL, &context) != 0) return 1;
    N_Vector y = N_VNew_Serial(STATES, context);
    N_VConst(0.0, y);
    void *solver = CVodeCreate(bdf ? CV_BDF : CV_ADAMS, context);
    CVodeInit(solver, rates, 0.0, y);
    CVodeSStolerances(solver, tolerance, tolerance);
    CVodeSetMaxNumSteps(solver, 100000000);
    if (bdf) {
        SUNMatrix matrix = SUNDenseMatrix(STATES, STATES, context);
        CVodeSetLinearSolver(solver, SUNLinSol_Dense(y, matrix, context), matrix);
    } else {
        CVodeSetNonlinearSolver(solver, SUNNonlinSol_FixedPoint(y, 0, context));
    }
    long rows = lround(duration / every);
    double *kept = malloc(sizeof(double) * STATES * (size_t)(rows + 1));
    double begun = now();
    realtype t = 0.0;
    for (long row = 1; row <= rows; row++) {
        if (CVode(solver, every * (double)row, y, &t, CV_NORMAL) < 0) return 1;
        memcpy(kept + STATES * row, N_VGetArrayPointer(y), sizeof(double) * STATES);
    }
    double seconds = now() - begun;
    long calls = 0;
    CVodeGetNumRhsEvals(solver, &calls);
    printf("%.9f %ld\n", seconds, calls);
    for (long row = 1; row <= rows; row++) {
        printf("%.17g", every * (double)row);
        for (int i = 0; i < STATES; i++) printf(" %.17g", kept[STATES * row + i] * scale[i]);
        printf("\n");
    }
    return 0;
}
