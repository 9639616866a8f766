"""Figures of a loop gain T(jω) from an adaptive frequency grid: no polynomial, no root of the closed loop.

The critical point is T = −1 (the inversion is left out).  Stability is Nyquist's criterion by the change of
arg(1 + T): with Z closed-loop and P open-loop poles in the right half-plane, n0 poles at the origin and T growing
as s^e at infinity, Δarg(1 + T) over ω = 0 … ∞ is π(P − Z + (n0 + e)/2).
"""
import numpy as np
from scipy.optimize import brentq, minimize_scalar


class Curve:
    """T on a grid that is refined until neither magnitude nor angle, of T or 1 + T, jumps."""

    def __init__(self, gain, low, high, pairs=(), marks=(), per_decade=60, finest=0.25):
        self.gain = gain
        decades = np.log10(high / low)
        grid = [np.geomspace(low, high, int(per_decade * decades) + 2), np.array(marks)]
        for pole in pairs:  # lightly damped poles and zeros (rad/s): points at multiples of their half-width
            f, width = abs(pole) / (2 * np.pi), max(abs(pole.real), 1e-9 * abs(pole)) / (2 * np.pi)
            offsets = np.concatenate([[0], np.geomspace(0.02, max(30, 0.5 * f / width), 60)]) * width
            grid += [f + offsets, f - offsets]
        f = np.unique(np.concatenate(grid))
        self.f = f[(f >= low) & (f <= high)]
        self.t = gain(self.f)
        for _ in range(40):
            with np.errstate(divide="ignore", invalid="ignore"):
                steps = (np.abs(np.angle((1 + self.t[1:]) / (1 + self.t[:-1]))),
                         np.abs(np.angle(self.t[1:] / self.t[:-1])) * (np.abs(self.t[1:]) > 1e-3),
                         np.abs(np.log(np.abs(self.t[1:] / self.t[:-1]))) * 0.5)
            wide = np.maximum.reduce(steps) > finest
            wide &= self.f[1:] / self.f[:-1] > 1 + 1e-12
            if not wide.any() or len(self.f) > 200000:
                break
            middle = np.sqrt(self.f[1:][wide] * self.f[:-1][wide])
            self.f = np.concatenate([self.f, middle])
            self.t = np.concatenate([self.t, gain(middle)])
            order = np.argsort(self.f)
            self.f, self.t = self.f[order], self.t[order]

    def one(self, f):
        return self.gain(np.array([f]))[0]


def _roots(function, f, values):
    """Return the frequencies at which a function changes sign between neighbours of the grid."""
    found = []
    for i in np.where(np.sign(values[:-1]) * np.sign(values[1:]) < 0)[0]:
        u = brentq(lambda u: function(np.exp(u)), np.log(f[i]), np.log(f[i + 1]), xtol=1e-13)
        found.append(float(np.exp(u)))
    found += [float(f[i]) for i in np.where(values == 0)[0]]
    return sorted(found)


def unstable_roots(curve, poles, origin, excess=0, sampled=False, delayed=False):
    """Return Z, the number of closed-loop poles in the right half-plane (infinite where a delay turns |T| > 1 for ever)."""
    if delayed and abs(curve.t[-1]) >= 1:
        return np.inf
    angle = np.unwrap(np.angle(1 + curve.t))
    start, end = angle[0], angle[-1]
    quarter = np.pi / 2
    parity = origin % 2  # the exact angle at ω → 0: real for an even number of poles at the origin, else imaginary
    start = (2 * np.round((start / quarter - parity) / 2) + parity) * quarter
    if sampled or delayed:  # nothing turns around −1 any more
        end = 2 * np.pi * np.round(end / (2 * np.pi))
    else:
        end = (2 * np.round((end / quarter - excess % 2) / 2) + excess % 2) * quarter
    return int(np.round(poles + (origin + excess) / 2 - (end - start) / np.pi))


def margins(curve, low, high, stable):
    """Return the figures over [low, high] Hz as theory sheet section 8 defines them; None: does not exist."""
    inside = (curve.f >= low * (1 - 1e-12)) & (curve.f <= high * (1 + 1e-12))
    f, t = curve.f[inside], curve.t[inside]
    crossovers = _roots(lambda x: np.log(abs(curve.one(x))), f, np.log(np.abs(t)))
    angles = [abs(np.degrees(np.angle(-curve.one(x)))) for x in crossovers]
    phase = (min(angles) if stable else -min(angles)) if angles else None
    # Phase crossovers: Im T changes sign where Re T < 0 (the grid bounds the turn between neighbours).
    crossing = [x for x in _roots(lambda x: curve.one(x).imag, f, t.imag) if curve.one(x).real < 0]
    sizes = [20 * np.log10(abs(curve.one(x))) for x in crossing]
    gain = reduction = None
    if stable:
        gain = min([-g for g in sizes if g < 0], default=None)
        reduction = min([g for g in sizes if g > 0], default=None)
    elif sizes:
        gain = -min(abs(g) for g in sizes)
    distance = np.abs(1 + t)
    least = distance.min()
    inner = np.arange(1, len(f) - 1)
    valleys = inner[(distance[1:-1] <= distance[:-2]) & (distance[1:-1] <= distance[2:]) & (distance[1:-1] < 1.3 * least + 0.05)]
    for i in valleys:
        found = minimize_scalar(lambda u: abs(1 + curve.one(np.exp(u))), bounds=(np.log(f[max(i - 2, 0)]), np.log(f[min(i + 2, len(f) - 1)])),
                                method="bounded", options={"xatol": 1e-9})
        least = min(least, found.fun)
    return {"crossovers": crossovers, "crossover": crossovers[-1] if crossovers else None, "phase-margin": phase,
            "gain-margin": gain, "gain-reduction-margin": reduction, "modulus-margin": float(least), "stable": stable}
