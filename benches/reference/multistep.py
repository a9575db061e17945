"""The program beside a multistep solver in C, at the same achieved error, in one run.

The pump train of the bench, its start and then shaken at 5 Hz, so that it never settles. Both are
run at several tolerances; the error is the largest one of the magnetic phase over rows of 0.93 s,
against CVODE at 1e-13. Times are of the processor, medians of turns taken one after the other; of
the program the whole command is timed, less that of a run of 0.01 s, so that it pays for its
observer, its energy audit and its files. At errors that both reach, the ratio of times is read off
by straight lines through the logarithms.

Usage: multistep.py PROGRAM [TURNS]      needs cc, the headers of SUNDIALS 6 and numpy
"""
import csv
import pathlib
import resource
import statistics
import subprocess
import sys
import tempfile

import numpy as np

HERE = pathlib.Path(__file__).parent
DURATION, EVERY = 55.8, 0.93
TRAIN = (HERE.parent / "pump_train.yaml").read_text()
LIBRARIES = ["-lsundials_cvode", "-lsundials_nvecserial", "-lm"]


def scenario(folder, ripple, tolerance, duration):
    text = TRAIN.replace("duration: 610 s", f"duration: {duration} s").replace(
        "output_step: 1 s", f"output_step: {min(EVERY, duration)} s"
    ).replace("tolerance: 1e-8", f"tolerance: {tolerance}")
    if ripple:
        text += (f"  shaking: {{ body: impeller, law: {{ prescribed: {{ torque: {{ sine: {{ mean: 0 N*m, "
                 f"amplitude: {ripple} N*m, frequency: 5 Hz, phase: 0 deg }} }} }} }} }}\n")
    path = folder / "case.yaml"
    path.write_text(text)
    return path


def timed(call):
    """Seconds of the processor that a command took, and what it printed."""
    used = lambda: sum(resource.getrusage(resource.RUSAGE_CHILDREN)[:2])
    begun = used()
    done = subprocess.run(call, capture_output=True, text=True)
    assert done.returncode in (0, 1), done.stderr
    return used() - begun, done.stdout


def by_program(program, folder, ripple, tolerance, turns):
    call = lambda path: [program, "run", str(path), "--out", str(folder / "out"), "--no-charts", "--quiet"]
    times = []
    for _ in range(turns):
        short, _ = timed(call(scenario(folder, ripple, tolerance, 0.01)))
        whole, _ = timed(call(scenario(folder, ripple, tolerance, DURATION)))
        times.append(whole - short)
    with open(folder / "out" / "series.csv", newline="") as file:
        rows = list(csv.reader(file))
    place = [head.split(" [")[0] for head in rows[0]].index("gear.phase")
    return statistics.median(times), np.array([float(row[place]) for row in rows[2:]])


def by_solver(solver, method, ripple, tolerance, turns):
    times = []
    for _ in range(turns):
        _, out = timed([solver, method, str(tolerance), str(DURATION), str(EVERY), str(ripple)])
        lines = out.splitlines()
        times.append(float(lines[0].split()[0]))
    return statistics.median(times), np.array([float(line.split()[7]) for line in lines[1:]])


def at_error(points, error):
    """Time at an error, by straight lines through the logarithms; None outside."""
    points = sorted((np.log(e), np.log(t)) for e, t in points)
    errors, times = zip(*points)
    if not errors[0] <= np.log(error) <= errors[-1]:
        return None
    return float(np.exp(np.interp(np.log(error), errors, times)))


def main():
    program = sys.argv[1]
    turns = int(sys.argv[2]) if len(sys.argv) > 2 else 3
    with tempfile.TemporaryDirectory() as name:
        folder = pathlib.Path(name)
        solver = str(folder / "multistep")
        subprocess.run(["cc", "-O2", str(HERE / "multistep.c"), "-o", solver, *LIBRARIES], check=True)
        for ripple, what in [(200, "shaken at 5 Hz")]:
            _, exact = by_solver(solver, "adams", ripple, 1e-13, 1)
            found = {}
            for method in ["program", "adams", "bdf"]:
                found[method] = []
                tolerances = [1e-5, 1e-6, 1e-7, 1e-8, 1e-9] if method == "program" else [
                    1e-6, 1e-7, 1e-8, 1e-9, 1e-10, 1e-11]
                for tolerance in tolerances:
                    if method == "program":
                        seconds, phase = by_program(program, folder, ripple, tolerance, turns)
                    else:
                        seconds, phase = by_solver(solver, method, ripple, tolerance, turns)
                    error = float(np.max(np.abs(phase - exact)))
                    found[method].append((error, seconds))
                    print(f"{what}, {method:7s} at {tolerance:.0e}: error {error:.1e} rad, {1e3 * seconds:8.1f} ms")
            for method in ["adams", "bdf"]:
                for error in [1e-5, 1e-6, 1e-7, 1e-8, 1e-9]:
                    ours, theirs = at_error(found["program"], error), at_error(found[method], error)
                    if ours and theirs:
                        print(f"{what}, error {error:.0e}: program over {method} {ours / theirs:.2f}")


if __name__ == "__main__":
    main()
