"""The averaged models of a power stage at one assignment: operating point, small signal, current mode, discontinuous.

Continuous conduction: state-space averaging (see circuit.py).  Peak current mode: R. B. Ridley, "A new,
continuous-time model for current-mode control", IEEE Trans. Power Electronics 6(2), 1991.  Discontinuous conduction:
Sun, Mitchell, Greuel, Krein, Bass, "Averaged modeling of PWM converters operating in discontinuous conduction mode",
IEEE Trans. Power Electronics 16(4), 2001, linearised numerically by complex steps.

Conventions: at the operating point the load is a current; the small-signal matrices contain its conductance.
"""
import numpy as np
from scipy.optimize import brentq, fsolve, minimize_scalar

import circuit
from circuit import BOOST, BUCK, IDLE, OFF, ON


class Linear:
    """x' = A x + b d + g vg; each output is (row, duty, vg): y = row x + duty d + vg-share vg."""

    def __init__(self, a, b, g, outputs):
        self.a, self.b, self.g, self.outputs = a, b, g, outputs
        self.n = len(a)

    def responses(self, s, names):
        """Return output/duty for an array of complex frequencies, one array for each name."""
        w0 = np.exp(np.mean(np.log(np.maximum(np.abs(np.linalg.eigvals(self.a)), 1e-6))))
        m = (s[:, None, None] * np.eye(self.n) - self.a) / w0
        x = np.linalg.solve(m, np.broadcast_to((self.b / w0)[:, None].astype(complex), (len(s), self.n, 1)))[:, :, 0]
        return [x @ self.outputs[name][0] + self.outputs[name][1] for name in names]

    def to_input(self, s, names):
        """Return output/vg at constant duty."""
        x = np.linalg.solve(s[:, None, None] * np.eye(self.n) - self.a,
                            np.broadcast_to(self.g[:, None].astype(complex), (len(s), self.n, 1)))[:, :, 0]
        return [x @ self.outputs[name][0] + self.outputs[name][2] for name in names]

    def with_law(self, gain, row, by_duty, by_input=0.0):
        """Return the model with d = gain·v + row x + by_duty d + by_input vg: its "duty" is then v."""
        k = 1 / (1 - by_duty)
        outputs = {name: (c + e * k * row, e * k * gain, h + e * k * by_input) for name, (c, e, h) in self.outputs.items()}
        return Linear(self.a + k * np.outer(self.b, row), k * gain * self.b, self.g + k * by_input * self.b, outputs)


def zeros(a, b, c, e):
    """Return the invariant zeros of (A, b, c, e): the eigenvalues of A − b c/e where e ≠ 0.

    Without feed-through y is replaced by y' + α y, which has the same zeros and one at −α, until there is one.
    """
    n = len(a)
    w0 = np.exp(np.mean(np.log(np.maximum(np.abs(np.linalg.eigvals(a)), 1e-6))))
    size = np.maximum(np.linalg.norm(np.linalg.solve(a / w0 - np.eye(n) * 0.7j, b.astype(complex)[:, None]), axis=1), 1e-300)
    a, b, c = a / w0 * size[None, :] / size[:, None], b / w0 / size, c * size
    added = []
    while abs(e) <= 1e-11 * np.sum(np.abs(c) * np.abs(b)) or e == 0:
        if len(added) == n:
            return np.array([])
        added.append(-1.2345 * 1.1 ** len(added))
        c, e = c @ a - added[-1] * c, c @ b
    found = list(np.linalg.eigvals(a - np.outer(b, c) / e))
    for z in added:
        found.remove(min(found, key=lambda w: abs(w - z)))
    # Rounding leaves zeros that lie at infinity at a finite, meaningless place.
    furthest = 1e6 * np.max(np.abs(np.linalg.eigvals(a)))
    return np.array([z for z in found if abs(z) < furthest]) * w0


class Point:
    """Operating point and mode; `linear` is the duty model, None where no model exists."""


# ---- continuous conduction -------------------------------------------------------------------------------------

def average(s, d, g, parts=None):
    on, off = parts or (circuit.part(s, ON, g), circuit.part(s, OFF, g))
    return {k: d * getattr(on, k) + (1 - d) * getattr(off, k) for k in ("dx", "vo", "ig", "vt")}


def steady(s, d):
    """Return (x, mean output voltage) at a duty with the load held as a current."""
    rows = average(s, d, 0.0)
    u = s.inputs(0.0)
    n = len(rows["dx"])
    x = -np.linalg.solve(rows["dx"][:, :n], rows["dx"][:, n:] @ u)
    return x, rows["vo"] @ np.concatenate([x, u])


def conversion(s, d):
    """Return the mean output voltages at an array of duties."""
    parts = circuit.part(s, ON, 0.0), circuit.part(s, OFF, 0.0)
    u, n = s.inputs(0.0), len(parts[0].dx)
    d = np.asarray(d)[:, None]
    m = d[:, :, None] * parts[0].dx + (1 - d)[:, :, None] * parts[1].dx
    x = -np.linalg.solve(m[:, :, :n], (m[:, :, n:] @ u)[:, :, None])[:, :, 0]
    row = d * parts[0].vo + (1 - d) * parts[1].vo
    return np.sum(row[:, :n] * x, axis=1) + row[:, n:] @ u


def duty(s):
    """Return the lowest duty at which the rising output voltage passes V, None where it cannot be reached."""
    d = np.concatenate([np.geomspace(1e-6, 1e-3, 20), np.linspace(0.004, 0.996, 250), 1 - np.geomspace(4e-3, 1e-6, 30)])
    excess = conversion(s, d) - s.v
    if excess[0] >= 0:
        return None
    at = np.where((excess[:-1] < 0) & (excess[1:] >= 0))[0]
    f = lambda q: conversion(s, [q])[0] - s.v
    if len(at) == 0:  # perhaps a peak between two points
        i = int(np.clip(np.argmax(excess), 1, len(d) - 2))
        best = minimize_scalar(lambda q: -f(q), bounds=(d[i - 1], d[i + 1]), method="bounded", options={"xatol": 1e-13})
        if best.fun > 0:
            return None
        return brentq(f, d[i - 1], best.x, xtol=1e-15)
    return brentq(f, d[at[0]], d[at[0] + 1], xtol=1e-15)


def duty_peak(s):
    """Return the duty of the highest conversion ratio with I = V/R drawn, None in the buck family."""
    if s.topology in BUCK:
        return None
    full = s.i

    def volts(d):  # V is linear in the current: V(d, I) = V0 − k I, and I = V/R
        s.i = 0.0
        open_ = conversion(s, [d])[0]
        s.i = full
        k = (open_ - conversion(s, [d])[0]) / full
        return open_ / (1 + k * full / s.v)
    d = np.concatenate([np.linspace(0.01, 0.98, 98), 1 - np.geomspace(0.02, 1e-7, 200)])
    v = [volts(q) for q in d]
    i = int(np.argmax(v))
    if i == len(d) - 1:
        return 1.0
    return float(minimize_scalar(lambda q: -volts(q), bounds=(d[i - 1], d[i + 1]), method="bounded", options={"xatol": 1e-10}).x)


def continuous(s, d, x=None):
    """Return the operating point in continuous conduction with its duty model, around a state other than its own if given."""
    p = Point()
    p.duty, p.mode = d, "ccm"
    if x is None:
        x, _ = steady(s, d)
    g = s.g
    on, off = circuit.part(s, ON, g), circuit.part(s, OFF, g)
    u = s.inputs(g)
    n = len(x)
    xu = np.concatenate([x, u])
    rows = average(s, d, g, (on, off))
    p.on_slopes = (on.dx @ xu)[:2 if s.two else 1]
    p.currents = x[:2 if s.two else 1]
    p.terminal = rows["vt"] @ xu
    outputs = {k: (rows[k][:n], (getattr(on, k) - getattr(off, k)) @ xu, rows[k][n]) for k in ("vo", "ig", "vt")}
    state = np.eye(n)
    outputs["is"] = (state[0] + (state[1] if s.two else 0), 0.0, 0.0)
    if s.two:
        outputs["vc"] = (state[2], 0.0, 0.0)
    p.linear = Linear(rows["dx"][:, :n], (on.dx - off.dx) @ xu, rows["dx"][:, n], outputs)
    p.x, p.u, p.parts = x, u, (on, off)
    return p


# ---- discontinuous conduction ----------------------------------------------------------------------------------

def pulse_equations(s, g):
    """Return f(x, d, u) → (x', vo, vt, ipk, d2) of the averaged discontinuous stage, analytic in x, d, u."""
    on, off, idle = (circuit.part(s, k, g) for k in (ON, OFF, IDLE))

    def f(x, d, u):
        rest = np.concatenate([x, u])
        rest[0] = 0
        peak = d * s.T * (on.dx[0] @ rest) / (1 - on.dx[0, 0] * d * s.T / 2)
        fall = 2 * x[0] / peak - d
        during = rest.copy()
        during[0] = peak / 2
        total = lambda k: d * (getattr(on, k) @ during) + fall * (getattr(off, k) @ during) + (1 - d - fall) * (getattr(idle, k) @ rest)
        return total("dx"), total("vo"), total("vt"), total("ig"), peak, fall
    return f


def discontinuous(s):
    """Return the operating point in discontinuous conduction (single inductor), solved by Newton from the ideal duty."""
    f, u = pulse_equations(s, 0.0), s.inputs(0.0)
    m = s.v / (s.drive * s.vg)
    k = 2 * s.l * s.ff * s.i / s.v
    d0 = {0: m * np.sqrt(k / max(1 - m, 1e-3)), 1: np.sqrt(k * m * max(m - 1, 1e-3)), 2: m * np.sqrt(k)}[
        0 if s.topology in BUCK else 1 if s.topology in BOOST else 2]
    mean = s.i * (1 if s.topology in BUCK else m if s.topology in BOOST else 1 + m)
    x0 = np.concatenate([[mean], np.full(len(s.banks), s.v)])
    if s.filter:
        x0 = np.concatenate([x0, [s.v * s.i / s.vg], np.full(len(s.filter[2]), s.vg)])
    n = len(x0)

    def equations(z):
        dx, vo, *_ = f(z[:n] * x0, z[n] * d0, u)
        return np.concatenate([dx / x0 * np.append([s.T], np.ones(n - 1) * s.T * 100), [vo / s.v - 1]])
    best = None
    for start in (1.0, 0.9, 1.1, 1.3, 0.7):
        z, _, _, _ = fsolve(equations, np.full(n + 1, start), full_output=True, xtol=1e-14)
        for _ in range(4):  # polish with exact derivatives
            h = 1e-30
            jac = np.array([equations(z + 1j * h * e).imag / h for e in np.eye(n + 1)]).T
            z = z - np.linalg.solve(jac, equations(z))
        error = np.max(np.abs(equations(z)))
        if best is None or error < best[0]:
            best = error, z
        if error < 1e-11:
            break
    if best[0] > 1e-8:
        return None
    x, d = best[1][:n] * x0, best[1][n] * d0
    p = Point()
    p.mode, p.duty, p.currents, p.x, p.u = "dcm", d, x[:1], x, u
    _, _, p.terminal, _, p.peak, p.fall = f(x, d, u)
    p.linear = pulse_linear(s, x, d)
    return p


def pulse_linear(s, x, d):
    """Linearise the averaged discontinuous stage at (x, d) by complex steps."""
    f, u = pulse_equations(s, s.g), s.inputs(s.g).astype(complex)
    n, h = len(x), 1e-30
    z = x.astype(complex)
    columns = [f(z + 1j * h * e, d + 0j, u) for e in np.eye(n)]
    by_duty = f(z, d + 1j * h, u)
    by_input = f(z, d + 0j, u + 1j * h * np.array([1, 0, 0]))
    take = lambda k: (np.array([c[k].imag / h for c in columns]), by_duty[k].imag / h, by_input[k].imag / h)
    a = np.array([c[0].imag / h for c in columns]).T
    return Linear(a, by_duty[0].imag / h, by_input[0].imag / h, {"vo": take(1), "vt": take(2), "ig": take(3)})


def two_inductor_pulse(s):
    """Return the loss-free operating point of sepic, cuk and zeta: ½ (Vg d T)²/(L1∥L2)/T = (V + VF) I."""
    p = Point()
    p.mode, p.linear = "dcm", None
    p.duty = np.sqrt(2 * s.le * s.ff * (s.v + s.vf) * s.i) / s.vg
    return p


def operate(s):
    """Return the operating point of a stage, None where the voltage cannot be reached."""
    d = duty(s)
    if d is None:
        return None
    p = continuous(s, d)
    total, ripple = np.sum(p.currents), np.sum(p.on_slopes) * d * s.T
    if s.synchronous or total >= ripple / 2:
        p.ripples = p.on_slopes * d * s.T
        return p
    if s.two:
        return two_inductor_pulse(s)
    q = discontinuous(s)
    if q is not None:
        q.ripples = np.array([q.peak])
    return q
