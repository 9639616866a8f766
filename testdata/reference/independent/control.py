"""How the control voltage sets the duty: modulators, peak current mode, and the output ripple at the comparator.

Peak current mode: R. B. Ridley, "A new, continuous-time model for current-mode control", IEEE Trans. Power
Electronics 6(2), 1991: d = Fm (vc − Ri He(s) is + kf' rise + kr' fall) with He(s) = 1 − sT/2 + (sT/π)².
"""
import numpy as np
import scipy.linalg

import circuit
import network
from circuit import OFF, ON
from model import Linear, average, zeros

HARMONICS = 400  # of the switching ripple; the terms fall with the square


class Control:
    """What the loop sees: `response(s)` = output per volt at the comparator or per duty, with its roots and DC gains."""


def combine(terms):
    """Add outputs: terms of (factor, (row, duty, vg))."""
    return tuple(sum(k * t[i] for k, t in terms) for i in range(3))


def ideal_slopes(s, p):
    """Return the ideal on-slope and falling slope (A/s, positive) of the sensed current as outputs of the duty model."""
    o = p.linear.outputs
    if s.two:
        vo, vt, vc = o["vo"], o["vt"], o["vc"]
        a, b = 1 / s.l, 1 / s.l2
        if s.topology == "sepic":
            return combine([(a, vt), (b, vc)]), combine([(a, vc), (a + b, vo), (-a, vt)])
        if s.topology == "cuk":
            return combine([(a, vt), (b, vc), (-b, vo)]), combine([(a, vc), (-a, vt), (b, vo)])
        return combine([(a + b, vt), (b, vc), (-b, vo)]), combine([(a, vc), (b, vo)])
    (a1, b1, _, _), (a2, b2, _, _) = s.coefficients
    m = s.drive
    return (combine([(a1 * m / s.l, o["vt"]), (-b1 / s.l, o["vo"])]),
            combine([(b2 / s.l, o["vo"]), (-a2 * m / s.l, o["vt"])]))


def control(s, p, modulator):
    """Return the control-to-output model with the modulator's gain `fm` in front of it."""
    c = Control()
    lin = p.linear
    vo = lin.outputs["vo"]
    c.zeros = zeros(lin.a, lin.b, vo[0], vo[1])
    zero = np.array([0j])
    c.line_gain = abs(lin.to_input(zero, ["vo"])[0][0])
    ratio = modulator.get("control-ratio", 1.0)
    if modulator["scheme"] == "voltage-mode":
        ramp = modulator["ramp-amplitude"]
        if modulator.get("feed-forward"):
            ramp *= s.vg / modulator["nominal-input"]
        c.fm = ratio / ramp
        c.law_row, c.law_duty = np.zeros(lin.n), 0.0
        if modulator.get("feed-forward") and s.filter:  # d = v/ramp − (D/vt) vt^
            k = p.duty / p.terminal
            c.law_row, c.law_duty = -k * lin.outputs["vt"][0], -k * lin.outputs["vt"][1]
        c.linear = lin.with_law(1.0, c.law_row, c.law_duty)
        c.poles = np.linalg.eigvals(c.linear.a)
        c.response = lambda sv: c.linear.responses(sv, ["vo"])[0]
        c.gain = abs(c.response(zero)[0])
        return c
    c.fm = ratio
    sense = s.turns * modulator["current-sense-gain"] / s.phases
    slope = np.sum(p.on_slopes) if p.mode == "ccm" else p.peak / (p.duty * s.T)
    external = modulator.get("slope-compensation", 0) + s.magnetizing * p.terminal
    gain = 1 / ((sense * slope + external) * s.T)
    c.slopes = sense * slope, external
    rise, fall = ideal_slopes(s, p)
    d, T = p.duty, s.T
    if p.mode == "dcm":  # the current starts from zero in every period: no feedback, only d = Fm (vc − D T Ri rise)
        k = -gain * d * T * sense
        c.linear = lin.with_law(gain, k * rise[0], k * rise[1], k * rise[2])
        c.poles = np.linalg.eigvals(c.linear.a)
        c.response = lambda sv: c.linear.responses(sv, ["vo"])[0]
        c.line_gain = abs(c.linear.to_input(zero, ["vo"])[0][0])
        c.gain = abs(c.response(zero)[0])
        return c
    kf, kr = -d * T * sense * (1 - d / 2), (1 - d) ** 2 * T * sense / 2
    slopes = combine([(kf, rise), (kr, fall)])
    outputs = dict(lin.outputs, slopes=slopes)
    wide = Linear(lin.a, lin.b, lin.g, outputs)

    def response(sv):
        out, current, fed = wide.responses(sv, ["vo", "is", "slopes"])
        sampling = 1 - sv * T / 2 + (sv * T / np.pi) ** 2
        return gain * out / (1 + gain * (sense * sampling * current - fed))
    c.response = response
    c.gain = abs(response(zero)[0])
    slow = combine([(1.0, slopes), (-sense, lin.outputs["is"])])
    c.line_gain = abs(wide.with_law(gain, gain * slow[0], gain * slow[1], gain * slow[2]).to_input(zero, ["vo"])[0][0])
    c.poles = current_mode_poles(s, lin, gain, sense, slopes)
    return c


def current_mode_poles(s, lin, gain, sense, slopes):
    """Return the poles with He(s) closed, from a pencil with the states [x, d, w], w = T·d(is)/dt."""
    n, T, row = lin.n, s.T, lin.outputs["is"][0]
    scale = np.maximum(np.linalg.norm(np.linalg.solve(lin.a - 1j * np.eye(n) / T, lin.b.astype(complex)[:, None]), axis=1), 1e-300)
    a, b, row = lin.a * T * scale[None, :] / scale[:, None], lin.b * T / scale, row * scale
    fed = slopes[0] * scale
    mass, rate = np.zeros((n + 2, n + 2)), np.zeros((n + 2, n + 2))
    mass[:n, :n] = np.eye(n)
    rate[:n, :n], rate[:n, n] = a, b
    mass[n, :n], rate[n, n + 1] = row, 1.0                     # T is' = w
    mass[n + 1, n + 1] = gain * sense / np.pi ** 2             # d = gain (−Ri (is − w/2 + T w'/π²) + slopes)
    rate[n + 1, :n] = gain * (fed - sense * row)
    rate[n + 1, n] = gain * slopes[1] - 1
    rate[n + 1, n + 1] = gain * sense / 2
    alpha, beta = scipy.linalg.eig(rate, mass, right=False, homogeneous_eigvals=True)
    keep = np.argsort(np.abs(beta) / np.maximum(np.abs(alpha), 1e-300))[1:]
    return (alpha[keep] / beta[keep]) / T


def ripple_law(s, p, compensator, ratio):
    """Return (r_x, r_d): how the ripple at the comparator at turn-off follows state and duty (theory sheet section 11)."""
    k = np.arange(1, HARMONICS + 1)
    sv = 2j * np.pi * k * s.ff
    passed = network.response(compensator, sv) * ratio
    n, xu = len(p.x), np.concatenate([p.x, p.u])
    on, off = p.parts
    step = on.dx - off.dx

    def rows(d):
        weight = (np.exp(2j * np.pi * k * d) - 1) / (2j * np.pi * k) * passed
        r = average(s, d, s.g, p.parts)
        left = np.linalg.solve(np.transpose(sv[:, None, None] * np.eye(n) - r["dx"][:, :n], (0, 2, 1)),
                               np.broadcast_to(r["vo"][:n, None].astype(complex), (len(k), n, 1)))[:, :, 0]
        return -2 * np.real(weight @ left), -2 * np.real(np.sum(weight))

    def ripple(d):
        rho, phi = rows(d)
        return rho @ (step @ xu) + phi * ((on.vo - off.vo) @ xu)
    rho, phi = rows(p.duty)
    h = 1e-5 * min(p.duty, 1 - p.duty)
    by_duty = (ripple(p.duty + h) - ripple(p.duty - h)) / (2 * h)
    return rho @ step[:, :n] + phi * (on.vo - off.vo)[:n], by_duty


def with_ripple(s, p, c, compensator, ratio):
    """Return (poles, response) of the control-to-output model with the comparator's ripple counted, voltage mode."""
    row, by_duty = ripple_law(s, p, compensator, ratio)
    fm = c.fm / ratio
    closed = p.linear.with_law(1.0, c.law_row + fm * row, c.law_duty + fm * by_duty)
    return np.linalg.eigvals(closed.a), lambda sv: closed.responses(sv, ["vo"])[0]
