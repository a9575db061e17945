"""Independent integration of six trains, to compare with the program's series.

Each train is written out by hand in absolute angles (rad, SI): one function a train gives the
rate of its state and the channels to compare. Nothing is shared with the program. Pieces at
whose borders the equations change are integrated one after the other. The laws are those of
the scenario reference; sources: Kloss for the induction motor, Slootweg et al. 2003 for the
axial rotor, IEC 61400-1 ed. 3 for the gust (formulas from memory).

Usage: trains.py PROGRAM [TRAIN ...]
"""
import csv
import json
import math
import pathlib
import subprocess
import sys
import tempfile

import numpy as np
from scipy.integrate import solve_ivp
from scipy.optimize import minimize_scalar

HERE = pathlib.Path(__file__).parent
PI = math.pi
TIGHT = dict(method="DOP853", rtol=1e-11, atol=1e-12)


def pieces(rate, state, borders, times, max_step=np.inf):
    """Integrates from border to border; rows at `times`, right-hand values at a border."""
    rows = np.empty((len(times), len(state)))
    for begin, end in zip(borders, borders[1:]):
        solution = solve_ivp(rate, (begin, end), state, dense_output=True, max_step=max_step, **TIGHT)
        assert solution.success, solution.message
        inside = (times >= begin - 1e-12) & (times <= end + 1e-12)
        rows[inside] = solution.sol(np.clip(times[inside], begin, end)).T
        state = solution.y[:, -1]
    return rows


def wrap(phase):
    return phase - 2 * PI * np.round(phase / (2 * PI))


# ---------------------------------------------------------------- pump, direct on line
def rating_plate(speed, voltage):
    rated_speed, synchronous = 1465 * PI / 30, 1500 * PI / 30
    rated = 22e3 / rated_speed
    start, pull_up, breakdown = 2.2 * rated, 1.8 * rated, 2.9 * rated
    m, sn = 2.9, 1 - 1465 / 1500
    sb = sn * (m + math.sqrt(m * m - 1))
    su = 0.8
    slip = 1 - speed / synchronous
    sign = 1.0 if slip >= 0 else -1.0
    s = abs(slip)
    if s == 0:
        return 0.0
    if s <= sb:
        torque = 2 * breakdown / (s / sb + sb / s)
    elif s <= su:                       # cubic with level ends
        x = (s - sb) / (su - sb)
        torque = breakdown + (pull_up - breakdown) * x * x * (3 - 2 * x)
    elif s <= 1:                        # level at pull-up, the secant's slope at standstill
        x = (s - su) / (1 - su)
        torque = pull_up + (start - pull_up) * (2 * x * x - x * x * x)
    else:
        torque = start
    return sign * voltage ** 2 * torque


def pump_start(times):
    k, d, peak = 2000 / 22, 24.2 / 22 ** 2, 12.0
    w0 = 267 * PI / 30

    def parts(y):
        a1, a2, a3, a4, w1, w2, w3, w4 = y
        fast = 20e3 * (a1 - a2) + 2 * (w1 - w2)
        slow = 50e3 * (a3 - a4) + 5 * (w3 - w4)
        phase, phase_rate = 4 * a2 + 22 * a3, 4 * w2 + 22 * w3
        fade = 1 / (1 + (phase_rate / 22 / peak) ** 2)
        field = k * math.sin(phase) + d * phase_rate * fade
        load = -700 * abs(w4 / w0) ** 2 * math.copysign(1, w4)
        return fast, slow, phase, field, load, rating_plate(w1, 0.9)

    def rate(_, y):
        fast, slow, _, field, load, motor = parts(y)
        return [*y[4:], (motor - fast) / 0.25, (fast - 4 * field) / 0.02,
                (-22 * field - slow) / 0.15, (slow + load) / 2.5]

    rows = pieces(rate, np.zeros(8), [0, 2], times, max_step=2e-3)
    found = [parts(y) for y in rows]
    return {
        "motor_rotor.speed": rows[:, 4], "impeller.speed": rows[:, 7], "impeller.angle": rows[:, 3],
        "motor_shaft.torque": [p[0] for p in found], "pump_shaft.torque": [p[1] for p in found],
        "gear.phase": [p[2] for p in found], "line_motor.torque": [p[5] for p in found],
    }


# ---------------------------------------------------------------- overload burst
def overload_burst(times):
    raw = lambda x: math.sin(x) + 0.05 * math.sin(3 * x + math.radians(25))
    up = minimize_scalar(lambda x: -raw(x), bounds=(0.5, 2.5), method="bounded", options=dict(xatol=1e-13))
    down = minimize_scalar(raw, bounds=(-2.5, -0.5), method="bounded", options=dict(xatol=1e-13))
    norm = min(-up.fun, -down.fun)
    k, d = 80 / 6, 2.5 / 36

    def rate_with(lump):
        def rate(_, y):
            a1, a2, w1, w2, integral, torque = y
            phase, phase_rate = 6 * (a1 - a2), 6 * (w1 - w2)
            field = k * raw(phase) / norm + d * phase_rate
            error = 60 - w1
            wish = 4 * error + integral
            command = min(max(wish, -120), 120)
            held = (wish > 120 and error > 0) or (wish < -120 and error < 0)
            return [w1, w2, (torque - 6 * field) / 0.06, (6 * field - 0.2 * w2 + lump) / 0.8,
                    0.0 if held else 4 * error / 0.3, (command - torque) / 5e-3]
        return rate

    state, rows = np.array([0, 0, 60.0, 60.0, 0, 0]), np.empty((len(times), 6))
    for begin, end, lump in [(0, 1, 0.0), (1, 1.35, -160.0), (1.35, 4, 0.0)]:
        solution = solve_ivp(rate_with(lump), (begin, end), state, dense_output=True, max_step=5e-4, **TIGHT)
        inside = (times >= begin - 1e-12) & (times <= end + 1e-12)
        rows[inside] = solution.sol(np.clip(times[inside], begin, end)).T
        state = solution.y[:, -1]
    return {"motor_rotor.speed": rows[:, 2], "mixer.speed": rows[:, 3],
            "coupling.phase": 6 * (rows[:, 0] - rows[:, 1]), "drive.torque": rows[:, 5]}


# ---------------------------------------------------------------- conveyor stopped by its brake
def conveyor_stop(times):
    k, d = 900 / 30, 15 / 30 ** 2

    def parts(y):
        a1, a2, a3, a4, w1, w2, w3, w4 = y
        fast = 8e3 * (a1 - a2) + 1.5 * (w1 - w2)
        slow = 40e3 * (a3 - a4) + 20 * (w3 - w4)
        phase, phase_rate = 5 * a2 - 30 * a3, 5 * w2 - 30 * w3
        return fast, slow, phase, k * math.sin(phase) + d * phase_rate

    applied = lambda t: min(max((t - 1) / 0.2, 0), 1)

    def rate(t, y, stuck):
        fast, slow, _, field = parts(y)
        w1, w4 = y[4], y[7]
        drive = 25.0 if t < 1 else 0.0
        drum = 0.0 if stuck else (slow - math.copysign(120 + 500 * applied(t), w4)) / 6
        return [y[4], y[5], y[6], 0.0 if stuck else w4, (drive - fast - 0.02 * w1) / 0.12,
                (fast - 5 * field) / 0.01, (30 * field - slow) / 0.4, drum]

    state = np.array([0, 0, 0, 0, 150.0, 150.0, 25.0, 25.0])
    rows, stuck, begin = np.empty((len(times), 8)), False, 0.0
    stop = lambda t, y, s: y[7]
    stop.terminal, stop.direction = True, 0
    for end in [1.0, 1.2, 3.5]:
        while begin < end - 1e-13:
            nudged = begin + (1e-15 if begin == 1.0 else 0)
            solution = solve_ivp(rate, (nudged, end), state, dense_output=True, max_step=1e-3, args=(stuck,),
                                 events=None if stuck else [stop], **TIGHT)
            last = solution.t[-1]
            inside = (times >= begin - 1e-12) & (times <= last + 1e-12)
            rows[inside] = solution.sol(np.clip(times[inside], nudged, last)).T
            state, begin = solution.y[:, -1].copy(), last
            if not stuck and solution.status == 1:
                stuck, state[7] = True, 0.0
    assert stuck
    found = [parts(y) for y in rows]
    # The drum stays: the shaft never asks for more than what holds it.
    assert max(abs(p[1]) for p, t in zip(found, times) if t > begin - 1) < 880
    return {"motor_rotor.speed": rows[:, 4], "carrier.speed": rows[:, 6], "drum.speed": rows[:, 7],
            "drum.angle": rows[:, 3], "drum_shaft.torque": [p[1] for p in found],
            "gear.phase": [p[2] for p in found]}


# ---------------------------------------------------------------- three ports
def three_ports(times):
    k, d = 400 / 22, 0.3 / 16

    def parts(t, y):
        ai, ao, am, ap, wi, wo, wm, wp = y
        tail = 12e3 * (am - ap) + 4 * (wm - wp)
        phase, phase_rate = 4 * ai + 22 * ao - 26 * am, 4 * wi + 22 * wo - 26 * wm
        field = k * math.sin(phase) + d * phase_rate
        cogging = -1.5 * math.sin(104 * (ai - am) + math.radians(20))
        first = 40 * min(max((t - 0.1) / 0.5, 0), 1)
        wish = 12 * min(max((t - 0.5) / 1.0, 0), 1)
        second = min(max(60 * (wish - wo), -300), 300)
        water = -350 * abs(wp / 20) ** 1.8 * math.copysign(1, wp)
        return tail, phase, field, cogging, first, second, water

    def rate(t, y):
        tail, _, field, cogging, first, second, water = parts(t, y)
        return [*y[4:], (first - 4 * field + cogging - 0.05 * y[4]) / 0.02, (second - 22 * field) / 0.3,
                (26 * field - cogging - tail) / 0.5, (tail + water) / 3]

    rows = pieces(rate, np.zeros(8), [0, 0.1, 0.5, 0.6, 1.5, 2], times, max_step=5e-4)
    found = [parts(t, y) for t, y in zip(times, rows)]
    return {"inner_rotor.speed": rows[:, 4], "outer_rotor.speed": rows[:, 5], "propeller.speed": rows[:, 7],
            "tail.torque": [p[0] for p in found], "gear.phase": [p[1] for p in found],
            "second.torque": [p[5] for p in found]}


# ---------------------------------------------------------------- wind gust
def wind_gust(times):
    hub, diameter, height = 11.0, 30.0, 45.0
    sigma = 0.16 * (0.75 * hub + 5.6)
    gust = min(1.35 * (0.8 * 1.4 * 37.5 - hub), 3.3 * sigma / (1 + 0.1 * diameter / (0.7 * height)))

    def wind(t):
        x = t - 4
        if x < 0 or x > 10.5:
            return hub
        return hub - 0.37 * gust * math.sin(3 * PI * x / 10.5) * (1 - math.cos(2 * PI * x / 10.5))

    def power_coefficient(ratio, pitch):
        inverse = 1 / (ratio - 0.02 * pitch) - 0.003 / (pitch ** 3 + 1)
        return 0.73 * (151 * inverse - 0.58 * pitch - 0.002 * pitch ** 2.14 - 13.2) * math.exp(-18.4 * inverse)

    k, d = 90e3 / 26, 6e3 / 26 ** 2

    def parts(t, y):
        ah, am, ai, wh, wm, wi = y
        shaft = 30e6 * (ah - am) + 60e3 * (wh - wm)
        phase, phase_rate = 4 * ai - 26 * am, 4 * wi - 26 * wm
        field = k * math.sin(phase) + d * phase_rate
        v = wind(t)
        ratio = wh * 15 / v
        blades = 0.5 * 1.225 * PI * 15 ** 3 * v * v * power_coefficient(ratio, 1.0) / ratio
        generator = -min(6.8 * wi * wi, 9e3) if wi > 0 else 0.0
        return shaft, phase, field, blades, generator

    def rate(t, y):
        shaft, _, field, blades, generator = parts(t, y)
        return [*y[3:], (blades - shaft) / 90e3, (shaft + 26 * field) / 300, (generator - 4 * field) / 25]

    rows = pieces(rate, np.array([0, 0, 0, 5.2, 5.2, 33.8]), [0, 4, 14.5, 20], times, max_step=2e-2)
    found = [parts(t, y) for t, y in zip(times, rows)]
    return {"hub.speed": rows[:, 3], "inner_rotor.speed": rows[:, 5], "main_shaft.torque": [p[0] for p in found],
            "gear.phase": [p[1] for p in found], "blades.torque": [p[3] for p in found],
            "blades.flow": [wind(t) for t in times], "generator.torque": [p[4] for p in found]}


# ---------------------------------------------------------------- test bench
def test_bench(times):
    # Sun and carrier: ring held, sun = (24 + 72)/24 carrier = 4 carrier.
    # Disc train: brake rotor = -3.5 disc, generator rotor = 2 brake rotor = -7 disc.
    carrier_inertia = 0.2 + 16 * 0.01
    disc_inertia = 1.4 + 3.5 ** 2 * 0.05 + 49 * 0.02
    k, d, half = 300 / 8, 3 / 64, math.radians(1)

    def parts(t, y):
        a1, ac, ad, w1, wc, wd = y
        twist, twist_rate = a1 - 4 * ac, w1 - 4 * wc
        over = twist - half if twist > half else twist + half if twist < -half else 0.0
        shaft = 3e3 * over + 1 * twist_rate if over else 0.0
        if shaft * over < 0:
            shaft = 0.0
        phase, phase_rate = 8 * (ac - ad), 8 * (wc - wd)
        field = k * math.sin(phase) + d * phase_rate
        speed = abs(7 * wd)
        fan = np.interp(speed, [0, 40, 120], [0, 1, 6])
        shaker = 10 + 25 * math.sin(2 * PI * 3 * t) + 20 * min(max((t - 0.5) / 1.0, 0), 1)
        # Against the motion of the generator rotor, seen at the disc: seven times as much.
        drag = -7 * fan * math.copysign(1, wd) if wd else 0.0
        return shaft, twist, phase, field, shaker, drag

    def rate(t, y):
        shaft, _, _, field, shaker, drag = parts(t, y)
        return [*y[3:], (shaker - shaft) / 0.3, (4 * shaft - 8 * field) / carrier_inertia,
                (8 * field - 2 * y[5] + drag) / disc_inertia]

    rows = pieces(rate, np.zeros(6), [0, 0.5, 1.5, 3], times, max_step=1e-4)
    found = [parts(t, y) for t, y in zip(times, rows)]
    return {"motor_rotor.speed": rows[:, 3], "carrier.speed": rows[:, 4], "disc.speed": rows[:, 5],
            "generator_rotor.speed": -7 * rows[:, 5], "loose_shaft.twist": [p[1] for p in found],
            "coupling.phase": [p[2] for p in found]}


TRAINS = [pump_start, overload_burst, conveyor_stop, three_ports, wind_gust, test_bench]


def series(program, name, folder):
    """The program's series of a scenario as columns by channel."""
    call = [program, "run", str(HERE / f"{name}.yaml"), "--out", str(folder / name), "--no-charts", "--format", "json"]
    done = subprocess.run(call, capture_output=True, text=True)
    assert done.returncode == 0, f"{name}: status {done.returncode}\n{done.stderr}"
    with open(folder / name / "series.csv", newline="") as file:
        rows = list(csv.reader(file))
    columns = np.array([[float(field) if field else math.nan for field in row] for row in rows[1:]]).T
    return {head.split(" [")[0]: column for head, column in zip(rows[0], columns)}, json.loads(done.stdout)


def main():
    program, wanted = sys.argv[1], sys.argv[2:]
    worst = 0.0
    with tempfile.TemporaryDirectory() as folder:
        for train in TRAINS:
            name = train.__name__
            if wanted and name not in wanted:
                continue
            found, summary = series(program, name, pathlib.Path(folder))
            expected = train(found["time"])
            slips = {gear: part["slips"] for gear, part in summary["gears"].items()}
            print(f"{name}: slips {slips}, energy residual {summary['energy']['residual_share']:.1e}")
            for channel, values in expected.items():
                values = np.asarray(values, float)
                scale = np.max(np.abs(values))
                off = np.max(np.abs(found[channel] - values)) / scale
                at = found["time"][np.argmax(np.abs(found[channel] - values))]
                worst = max(worst, off)
                print(f"    {channel:26s} largest {scale:12.6g}   off by {off:8.1e} of it, at {at:g} s")
    print(f"worst: {worst:.1e}")
    return 0 if worst < 1e-5 else 1


if __name__ == "__main__":
    sys.exit(main())
