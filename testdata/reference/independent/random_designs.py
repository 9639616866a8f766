#!/usr/bin/env python3
"""Compare the program with the independent model on random believable designs.

usage: random_designs.py BINARY COUNT [--seed S] [--only TOPOLOGY,...] [--keep FOLDER] [--write FOLDER]

Each design is written as a spec file with tolerances and operating ranges; one assignment inside them is put to
`BINARY figures FILE --at ... --as json` and to the model.  Prints the worst difference of every figure and every
disagreement beyond the tolerances of the reference designs' README.  Exit status 1 if there is any.
"""
import argparse
import json
import os
import random
import subprocess
import sys
import tempfile

import numpy as np

import figures
import generate
import quantity
from circuit import Stage, TOPOLOGIES

# figure: (kind of difference, tolerance)
TOLERANCE = {
    "duty": ("relative", 1e-6), "inductor-current": ("relative", 1e-5), "inductor-ripple": ("relative", 1e-5),
    "second-inductor-current": ("relative", 1e-5), "second-inductor-ripple": ("relative", 1e-5), "duty-peak": ("relative", 1e-5),
    "stage.inductance": ("relative", 1e-9), "stage.capacitance": ("relative", 1e-9), "stage.esr": ("relative", 1e-9),
    "plant.control-gain": ("relative", 1e-5), "plant.line-gain": ("relative", 1e-5), "plant.resonance": ("relative", 1e-4),
    "plant.quality": ("relative", 1e-4), "plant.esr-zero": ("relative", 1e-9), "plant.rhp-zero": ("relative", 1e-4),
    "plant.poles": ("roots", 1e-4), "plant.zeros": ("roots", 1e-4),
    "input-filter.zo-over-zn": ("relative", 1e-3), "input-filter.zo-over-zd": ("relative", 1e-3), "input-filter.quality": ("relative", 1e-4),
}
for _key in ("on-slope", "external-slope", "slope-ratio", "half-frequency-quality"):
    TOLERANCE["current-loop." + _key] = ("relative", 1e-5)
for _key in ("duty", "control-gain", "line-gain", "resonance", "quality", "esr-zero", "rhp-zero"):
    TOLERANCE["ideal." + _key] = ("relative", 1e-9)
for _section in ("loop.", "loop.with-ripple."):
    TOLERANCE.update({_section + "crossover": ("relative", 1e-3), _section + "crossovers": ("list", 1e-3),
                      _section + "phase-margin": ("absolute", 0.05), _section + "gain-margin": ("absolute", 0.02),
                      _section + "gain-reduction-margin": ("absolute", 0.02), _section + "modulus-margin": ("absolute", 5e-4),
                      _section + "stable": ("same", 0)})


def look_up(tree, path):
    for name in path.split("."):
        if not isinstance(tree, dict):
            return None
        tree = tree.get(name)
    return tree


def roots_difference(ours, theirs):
    """Return the largest relative distance of a one-to-one match of two sets of roots, infinite for unequal counts."""

    theirs = [complex(*z) for z in theirs]
    ours = list(ours)
    if len(ours) != len(theirs):
        return np.inf
    worst = 0.0
    for z in sorted(ours, key=abs, reverse=True):
        near = min(theirs, key=lambda w: abs(w - z))
        theirs.remove(near)
        worst = max(worst, abs(near - z) / max(abs(z), 1e-300))
    return worst


def difference(kind, ours, theirs):
    """Return how far two figures are apart; infinite when only one exists."""
    if ours is None and theirs is None:
        return 0.0
    if ours is None or theirs is None:
        return np.inf
    if kind == "same":
        return 0.0 if ours == theirs else np.inf
    if kind == "roots":
        return roots_difference(ours, theirs)
    if kind == "list":
        if len(ours) != len(theirs):
            return np.inf
        return max((abs(a - b) / abs(a) for a, b in zip(ours, theirs)), default=0.0)
    gap = abs(ours - theirs)
    return gap / max(abs(ours), 1e-300) if kind == "relative" else gap


def ask(binary, path, settings):
    """Return the program's figures for one assignment, or the text of its refusal."""
    at = ",".join(f"{k}={v!r}" for k, v in settings.items())
    run = subprocess.run([binary, "figures", path, "--at", at, "--as", "json"], capture_output=True, text=True)
    if run.returncode != 0:
        return None, f"exit {run.returncode}: {(run.stdout + run.stderr).strip()[:400]}"
    return json.loads(run.stdout), None


def compare(ours, theirs):
    """Yield (figure, difference, ours, theirs) of everything that both should state."""
    if ours["mode"] != theirs["mode"]:
        yield "mode", np.inf, ours["mode"], theirs["mode"]
        return
    for path, (kind, _) in TOLERANCE.items():
        section, _, _ = path.rpartition(".")
        if section in ("loop", "plant", "loop.with-ripple", "input-filter", "current-loop"):
            mine, other = look_up(ours, section), look_up(theirs, section)
            if (mine is None) != (other is None):
                if path.endswith(("stable", "control-gain", "zo-over-zn", "on-slope")):
                    yield section, np.inf, mine and "present", other and "present"
                continue
            if mine is None:
                continue
        a, b = look_up(ours, path), look_up(theirs, path)
        if ours["mode"] is None and path.startswith(("ideal.", "duty-peak")):
            continue  # closed forms where nothing can be reached are of no use
        if ours.get("plant") is None and ours["mode"] == "dcm" and path.startswith(("inductor", "second")):
            continue  # two inductors in discontinuous conduction: only mode and duty are modelled
        if a is None and b is None:
            continue
        yield path, difference(kind, a, b), a, b


def effective_inductance(design):
    """Return {min, nominal, max} of one phase's inductance on the output side."""
    out = {}
    spread = {k: v for k, v in quantity.spreads(design).items() if k.endswith("inductor.inductance")}
    for i, name in enumerate(("min", "nominal", "max")):
        s = Stage(figures.point_of(design, {k: v[i] for k, v in spread.items()}))
        out[name] = s.le * s.phases
    return out


def main():
    arguments = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    arguments.add_argument("binary")
    arguments.add_argument("count", type=int)
    arguments.add_argument("--seed", type=int, default=1)
    arguments.add_argument("--only", default=",".join(TOPOLOGIES))
    arguments.add_argument("--keep", help="folder for the spec files of designs that disagree")
    arguments.add_argument("--write", help="only write the spec files of all designs to this folder")
    o = arguments.parse_args()
    unknown = set(o.only.split(",")) - set(TOPOLOGIES)
    if unknown:
        arguments.error("unknown topology " + ", ".join(sorted(unknown)))
    if o.write:
        os.makedirs(o.write, exist_ok=True)
        for number in range(o.count):
            design, _ = generate.random_design(random.Random(f"{o.seed}/{number}"), o.only.split(","))
            with open(os.path.join(o.write, f"design-{o.seed}-{number}.converter.json"), "w") as f:
                json.dump(design, f, indent=1, ensure_ascii=False)
        return 0
    worst, counts, modes, bad = {}, {}, {}, 0
    with tempfile.TemporaryDirectory() as folder:
        for number in range(o.count):
            rng = random.Random(f"{o.seed}/{number}")
            design, settings = generate.random_design(rng, o.only.split(","))
            what = f"{number} {generate.describe(design)}"
            path = os.path.join(folder, f"design-{o.seed}-{number}.converter.json")
            with open(path, "w") as f:
                json.dump(design, f, indent=1, ensure_ascii=False)
            theirs, refusal = ask(o.binary, path, settings)
            lines = []
            if refusal:
                lines.append(refusal)
            else:
                ours = figures.evaluate(design, settings)
                modes[str(ours["mode"])] = modes.get(str(ours["mode"]), 0) + 1
                found = list(compare(ours, theirs["corners"][0]))
                for key, value in effective_inductance(design).items():
                    other = theirs["effective-inductance"][key]
                    found.append(("effective-inductance", difference("relative", value, other), value, other))
                for figure, gap, a, b in found:
                    counts[figure] = counts.get(figure, 0) + 1
                    if gap > worst.get(figure, (-1,))[0]:
                        worst[figure] = gap, what
                    if not gap <= TOLERANCE.get(figure, ("", 1e-9))[1]:
                        lines.append(f"{figure}: model {a}, program {b}")
            if lines:
                bad += 1
                print(what)
                for line in lines:
                    print("    " + line)
                print("    at " + json.dumps(settings), flush=True)
                if o.keep:
                    os.makedirs(o.keep, exist_ok=True)
                    os.replace(path, os.path.join(o.keep, os.path.basename(path)))
    print(f"\n{o.count} designs, modes {modes}, {bad} with disagreements")
    print(f"{'figure':40s} {'compared':>8s} {'worst':>9s}  in")
    for figure in sorted(worst, key=lambda k: -worst[k][0] / max(TOLERANCE.get(k, ("", 1e-9))[1], 1e-12)):
        print(f"{figure:40s} {counts[figure]:8d} {worst[figure][0]:9.1e}  {worst[figure][1]}")
    return 1 if bad else 0


if __name__ == "__main__":
    sys.exit(main())
