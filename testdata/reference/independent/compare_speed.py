#!/usr/bin/env python3
"""Run the same corners through the program and through NumPy, side by side, and print the ratio of the times.

usage: compare_speed.py BINARY SPEC.yaml [--corners N] [--frequencies N] [--chunk N] [--by-hand]

SPEC is a single-inductor design in voltage mode and continuous conduction with one bank of output capacitors and an
op-amp network (testdata/reference/beacon-boost-type3.converter.yaml is one).  The program lists every corner it
analysed; NumPy computes the same ones, vectorised over corners and over logarithmically spaced frequencies: duty by
bisection, the averaged state matrices, their response by linear solution as for any order (--by-hand: from polynomials
of two states, which no other stage could use), loop gain, crossover and phase margin by interpolation between the two
frequencies around it, gain margin likewise, modulus margin as the least distance.

The program's time is that of `figures --jobs 1` less that of `--version`, reading, validating, worst-case search, rules and
printing included, over all the points that the search evaluated.  NumPy's is that of the arithmetic alone, on one thread.
"""
import argparse
import json
import os
import subprocess
import sys
import time

for name in ("OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ[name] = "1"
import numpy as np
import yaml

import quantity

FAMILY = {"buck": (1, 1, 0, 1), "boost": (1, 0, 1, 1), "buck-boost": (1, 0, 0, 1)}  # a, b while on; a, b while off


def run(*command):
    """Return the output of a command and the best of three wall times, s."""
    best = np.inf
    for _ in range(3):
        start = time.perf_counter()
        out = subprocess.run(command, capture_output=True, check=True).stdout
        best = min(best, time.perf_counter() - start)
    return out, best


def values(design, corners):
    """Return a function that gives a field over all corners: an array where it varies, else its nominal number."""
    nominal = quantity.nominal(design)

    def of(path, default=0.0):
        if path in corners[0]:
            return np.array([c[path] for c in corners])
        node = nominal
        for key in path.split("."):
            node = node.get(key) if isinstance(node, dict) else None
        return default if node is None else node
    return of


def stage(design, of):
    """Return state matrix, duty column, output row and feed-through of duty to output, each entry over all corners."""
    a1, b1, a0, b0 = FAMILY[design["topology"]]
    vg, v, i = of("input-voltage"), of("output-voltage"), of("load.current")
    n = of("output-capacitor.count", 1)
    c, rc = n * of("output-capacitor.capacitance"), of("output-capacitor.esr") / n
    length, rl = of("inductor.inductance"), of("inductor.resistance")
    on, off = rl + of("switch.on-resistance"), rl + of("rectifier.resistance")
    drop = of("rectifier.forward-drop")
    g = {"resistive": 1, "constant-current": 0, "constant-power": -1}[design["load"].get("behaviour", "resistive")] * i / v

    def excess(d):
        a, b, r = d * a1 + (1 - d) * a0, d * b1 + (1 - d) * b0, d * on + (1 - d) * off
        var = d * b1 + (1 - d) * b0 - b * b
        return b * (a * vg - (1 - d) * drop) - i * (r + rc * var) - v * b * b
    shape = np.broadcast(vg, i, length, c, rc).shape
    # the lowest root lies before the first sign change of a scan
    grid = np.linspace(0, 1, 250)[1:-1].reshape(-1, *([1] * len(shape)))
    signs = excess(grid + np.zeros((1, *shape))) >= 0
    first = signs.argmax(axis=0)
    low, high = np.take(grid.ravel(), np.maximum(first - 1, 0)), np.take(grid.ravel(), first)
    for _ in range(50):
        middle = (low + high) / 2
        up = excess(middle) < 0
        low, high = np.where(up, middle, low), np.where(up, high, middle)
    d = (low + high) / 2
    a, b, r = d * a1 + (1 - d) * a0, d * b1 + (1 - d) * b0, d * on + (1 - d) * off
    il = i / b
    alpha = 1 / (1 + g * rc)
    rho, step = alpha * rc, (b1 - b0) * il
    volts = lambda ak, bk, rk, ck: ak * vg - bk * (v + rho * (bk * il - i)) - rk * il - ck * drop
    kick = (volts(a1, b1, on, 0) - volts(a0, b0, off, 1)) / length
    # x = [inductor current, capacitor voltage]; the mean of b squared is that of b, which is 0 or 1
    matrix = [[-(r + rho * b) / length, -alpha * b / length], [alpha * b / c, -alpha * g / c]]
    return matrix, [kick, alpha * step / c], [rho * b, alpha], rho * step


def through_matrices(model, s, count):
    """Return the response of a state-space model at every frequency: one linear system for each corner and frequency."""
    matrix, column, row, feed = model
    full = lambda x: np.broadcast_to(x, count)
    a = np.array([[full(x) for x in line] for line in matrix]).transpose(2, 0, 1)
    b = np.array([full(x) for x in column]).T
    c = np.array([full(x) for x in row]).T
    x = np.linalg.solve(s[None, :, None, None] * np.eye(len(matrix)) - a[:, None], np.broadcast_to(b[:, None, :, None], (count, len(s), len(matrix), 1)))
    return np.einsum("kn,kfn->kf", c, x[..., 0]) + full(feed)[:, None]


def through_polynomials(model, s, count):
    """Return the same for two states from numerator and denominator worked out by hand."""
    (a11, a12), (a21, a22) = model[0]
    (b1, b2), (c1, c2), e = model[1], model[2], model[3]
    trace, det = a11 + a22, a11 * a22 - a12 * a21
    n0 = c1 * (a12 * b2 - a22 * b1) + c2 * (a21 * b1 - a11 * b2) + e * det
    n1 = c1 * b1 + c2 * b2 - e * trace
    column = lambda x: np.broadcast_to(x, count)[:, None]
    return (column(n0) + s * (column(n1) + s * column(e))) / (column(det) + s * (s - column(trace)))


def network(design, of, s):
    """Return C(s) of an op-amp network over corners and frequencies."""
    def part(name, default=0.0):
        value = of("compensator." + name, default)
        return value[:, None] if isinstance(value, np.ndarray) else value
    r1, r2, c1, c2 = part("upper-resistor"), part("feedback-resistor"), part("integrator-capacitor"), part("rolloff-capacitor")
    zf = 1 / (s * c1) if design["compensator"]["network"] == "type-1" else 1 / (1 / (r2 + 1 / (s * c1)) + s * c2)
    yi = 1 / r1 + 0 * s
    if design["compensator"]["network"] == "type-3":
        yi = yi + 1 / (part("lead-resistor") + 1 / (s * part("lead-capacitor")))
    h = zf * yi
    if "amplifier" in design["compensator"]:
        a0, gb = part("amplifier.open-loop-gain") or 1e6, part("amplifier.gain-bandwidth") or np.inf
        rl = part("lower-resistor")
        h = h / (1 + (1 + zf * (yi + (1 / rl if np.any(rl) else 0))) * (1 / a0 + s / (2 * np.pi * gb)))
    return h


def margins(t, f):
    """Return crossover, phase margin, gain margin and modulus margin from T on a grid of frequencies, by interpolation."""
    rows = np.arange(len(t))
    size = np.log(np.abs(t))
    falls = (size[:, :-1] > 0) & (size[:, 1:] <= 0)
    k = falls.shape[1] - 1 - falls[:, ::-1].argmax(axis=1)
    part = size[rows, k] / (size[rows, k] - size[rows, k + 1])
    x = np.log(f)
    crossover = np.exp(x[k] + part * (x[k + 1] - x[k]))
    angle = np.angle(-t)
    here, there = angle[rows, k], angle[rows, k + 1]
    phase = np.degrees(here + part * (((there - here) + np.pi) % (2 * np.pi) - np.pi))
    turns = (angle[:, :-1] > 0) & (angle[:, 1:] <= 0) & (np.abs(angle[:, 1:] - angle[:, :-1]) < np.pi) & (size[:, :-1] < 0)
    some = turns.any(axis=1)
    k = turns.argmax(axis=1)
    here, there = angle[rows, k], angle[rows, k + 1]
    part = here / np.where(here == there, 1, here - there)
    gain = np.where(some, -20 / np.log(10) * (size[rows, k] + part * (size[rows, k + 1] - size[rows, k])), np.nan)
    return crossover, phase, gain, np.abs(1 + t).min(axis=1)


def main():
    arguments = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    arguments.add_argument("binary")
    arguments.add_argument("spec")
    arguments.add_argument("--corners", type=int, default=1000, help="how many of the program's corners NumPy computes")
    arguments.add_argument("--frequencies", type=int, default=2000)
    arguments.add_argument("--chunk", type=int, default=50, help="corners at once: what fits the processor's caches is fastest")
    arguments.add_argument("--by-hand", action="store_true", help="the plant's response from polynomials of two states instead of matrices of any order")
    o = arguments.parse_args()
    with open(o.spec) as f:
        design = yaml.safe_load(f)
    if design["topology"] not in FAMILY or design["modulator"]["scheme"] != "voltage-mode" or "output-capacitor" not in design:
        sys.exit("compare_speed.py: only single-inductor stages in voltage mode with one bank")
    every, _ = run(o.binary, "figures", o.spec, "--as", "json", "--corners", "all", "--jobs", "1")
    listed = [c for c in json.loads(every)["corners"] if c["mode"] == "ccm" and c["loop"]]
    shown, program = run(o.binary, "figures", o.spec, "--as", "json", "--jobs", "1")
    _, start = run(o.binary, "--version")
    points = json.loads(shown)["analysed"]
    chosen = [listed[i] for i in np.linspace(0, len(listed) - 1, min(o.corners, len(listed))).astype(int)]

    f = np.geomspace(1e-6, 10, o.frequencies) * quantity.nominal(design)["switching-frequency"]
    s = 2j * np.pi * f
    respond = through_polynomials if o.by_hand else through_matrices
    found = []
    begin = time.perf_counter()
    for at in range(0, len(chosen), o.chunk):
        corners = [c["at"] for c in chosen[at:at + o.chunk]]
        of = values(design, corners)
        plant = respond(stage(design, of), s, len(corners))
        fm = of("modulator.control-ratio", 1.0) / of("modulator.ramp-amplitude")
        fm = fm[:, None] if isinstance(fm, np.ndarray) else fm
        found.append(margins(network(design, of, s) * fm * plant, f))
    numpy_time = time.perf_counter() - begin
    found = [np.concatenate(part) for part in zip(*found)]

    ours, theirs = (program - start) / points, numpy_time / len(chosen)
    print(f"program  {points:6d} points   {1e6 * ours:9.1f} µs a point   ({program - start:.3f} s of one core, start-up of {start:.3f} s taken off)")
    how = "polynomials by hand" if o.by_hand else "state matrices"
    print(f"NumPy    {len(chosen):6d} points   {1e6 * theirs:9.1f} µs a point   ({o.frequencies} frequencies, {how})")
    print(f"ratio    {theirs / ours:.0f}")
    for name, key, values_found, relative in (("crossover", "crossover", found[0], True), ("phase margin", "phase-margin", found[1], False),
                                              ("gain margin", "gain-margin", found[2], False), ("modulus margin", "modulus-margin", found[3], False)):
        theirs_all = np.array([np.nan if c["loop"][key] is None else c["loop"][key] for c in chosen])
        gap = np.abs(values_found - theirs_all) / (theirs_all if relative else 1)
        print(f"largest difference of the {name}: {np.nanmax(gap):.2g}{' relative' if relative else ''}")
    return 0


if __name__ == "__main__":
    sys.exit(main())
