"""All figures of one design at one assignment, in the shape and under the names of `halfplane figures --as json`."""
import math

import numpy as np
from scipy.optimize import minimize_scalar

import control
import loop
import model
import network
import quantity
from circuit import BOOST, BUCK, Stage


def point_of(design, settings):
    """Return the design's plain numbers at one assignment; what it leaves out is nominal."""
    p = quantity.nominal(design)
    p["modulator"]["nominal-input"] = p["input-voltage"]
    return quantity.assign(p, settings)


def evaluate(design, settings, thorough=True):
    """Return the figures as a nested dictionary; mode None: the output voltage cannot be reached.

    `thorough` adds what a search over many points does not need: input filter ratios, ripple, duty peak, closed forms.
    """
    point = point_of(design, settings)
    s = Stage(point)
    p = model.operate(s)
    out = {"mode": None, "duty": None, "plant": None, "loop": None, "stage": stage(s)}
    if thorough:
        out["duty-peak"] = model.duty_peak(s)
        out["ideal"] = ideal(s, p)
    if p is None:
        return out
    out.update({"mode": p.mode, "duty": p.duty})
    if p.linear is None:
        return out
    n = s.phases
    out.update({"inductor-current": p.currents[0] / n, "inductor-ripple": p.ripples[0] / n})
    if s.two:
        out.update({"second-inductor-current": p.currents[1] / n, "second-inductor-ripple": p.ripples[1] / n})
    modulator, compensator = point["modulator"], point["compensator"]
    c = control.control(s, p, modulator)
    right = [abs(z) for z in c.zeros if z.real > 0]
    out["plant"] = {"control-gain": c.gain, "line-gain": c.line_gain, "poles": c.poles, "zeros": c.zeros, "esr-zero": esr_zero(s),
                    "rhp-zero": min(right) / (2 * np.pi) if right else None}
    if thorough:
        out["plant"]["resonance"], out["plant"]["quality"] = resonance(s, p)
    if modulator["scheme"] == "peak-current-mode":
        on, external = c.slopes
        out["current-loop"] = {"on-slope": on, "external-slope": external, "slope-ratio": 1 + external / on}
        if p.mode == "ccm":
            out["current-loop"]["half-frequency-quality"] = 1 / (np.pi * ((1 + external / on) * (1 - p.duty) - 0.5))
    if s.filter and thorough:
        out["input-filter"] = filter_ratios(s, p, modulator, c)
    out["loop"] = loop_figures(s, c.poles, c.zeros, c.response, c.fm, point, coarse=not thorough)
    if thorough and modulator["scheme"] == "voltage-mode" and p.mode == "ccm" and compensator["network"] != "digital":
        poles, response = control.with_ripple(s, p, c, compensator, modulator.get("control-ratio", 1.0))
        out["loop"]["with-ripple"] = loop_figures(s, poles, c.zeros, response, c.fm, point)
    return out


def loop_figures(s, poles, zeros, response, fm, point, coarse=False):
    """Return the loop's figures for a control-to-output response with its modulator gain."""
    q, delay = point["compensator"], point["modulator"].get("delay", 0)
    sampled = q["network"] == "digital"
    sharp = [z for z in np.concatenate([poles, zeros]) if abs(z.imag) > 0 and abs(z.real) < 0.5 * abs(z)]
    if q["network"] == "transfer-function":
        for root in q.get("zeros", []) + q.get("poles", []):
            if isinstance(root, dict) and root["quality"] > 0.5:
                w = 2 * np.pi * root["frequency"]
                sharp.append(w * complex(-0.5 / root["quality"], math.sqrt(1 - 0.25 / root["quality"] ** 2)))

    def gain(f):
        sv = 2j * np.pi * f
        return network.response(q, sv) * fm * response(sv) * np.exp(-sv * delay)
    low, high = 1e-6 * s.ff, 10 * s.ff
    bottom, top = 1e-12 * s.ff, (1e4 if delay else 1e7) * s.ff
    if sampled:
        top = q["sampling-frequency"] / 2 * (1 - 1e-12)
        high = min(high, top)
    curve = loop.Curve(gain, bottom, top, sharp, [low, high], per_decade=25 if coarse else 60, finest=0.4 if coarse else 0.25)
    origin = network.integrators(q)
    excess = 0
    if not sampled and not delay and abs(curve.t[-1]) > 1e-6:  # the slope of |T| at the far end, never below 0 in this count
        slope = np.log(abs(curve.t[-1] / curve.t[-2])) / np.log(curve.f[-1] / curve.f[-2])
        excess = max(0, int(round(slope)))
    unstable = int(np.sum(np.real(poles) > 0)) + network.unstable_poles(q)
    count = loop.unstable_roots(curve, unstable, origin, excess, sampled, bool(delay))
    return loop.margins(curve, low, high, count == 0)


def stage(s):
    """Return inductance, capacitance and ESR on the output-filter side; the design's own banks, not the load's."""
    return {"inductance": s.le, "capacitance": sum(c for c, _ in s.banks), "esr": s.banks[0][1] if len(s.banks) == 1 else None}


def esr_zero(s):
    """Return the lowest zero of a bank with resistance, Hz."""
    return min([1 / (2 * np.pi * r * c) for c, r in s.banks if r > 0], default=None)


def resonance(s, p):
    """Return frequency (Hz) and quality of the lowest pole pair without input filter and current loop."""
    bare = s.without_filter(p.terminal)
    if p.mode == "ccm":
        rows = model.average(bare, p.duty, s.g)["dx"]
        poles = np.linalg.eigvals(rows[:, :len(rows)])
    else:
        poles = np.linalg.eigvals(model.pulse_linear(bare, p.x[:1 + len(s.banks)], p.duty).a)
    pairs = sorted([z for z in poles if z.imag > 1e-9 * abs(z)], key=abs)
    if pairs:
        z = pairs[0]
        return abs(z) / (2 * np.pi), abs(z) / (-2 * z.real)
    a, b = sorted(poles.real, key=abs)[:2]
    if a * b < 0:
        return None, None
    return math.sqrt(a * b) / (2 * np.pi), math.sqrt(a * b) / abs(a + b)


def ideal(s, p):
    """Return the loss-free closed forms (theory sheet section 4)."""
    out = dict.fromkeys(["duty", "control-gain", "line-gain", "resonance", "quality", "rhp-zero"])
    out["esr-zero"] = esr_zero(s)
    m, r, c, v = s.v / (s.drive * s.vg), s.v / s.i, sum(c for c, _ in s.banks), s.v
    family = "buck" if s.topology in BUCK else "boost" if s.topology in BOOST else "buck-boost"
    if p is not None and p.mode == "dcm":
        k = 2 * s.le * s.ff / r
        d, g = {"buck": lambda: (math.sqrt(k * m * m / (1 - m)), lambda d: 2 * v / d * (1 - m) / (2 - m)),
                "boost": lambda: (math.sqrt(k * m * (m - 1)), lambda d: 2 * v / d * (m - 1) / (2 * m - 1)),
                "buck-boost": lambda: (m * math.sqrt(k), lambda d: v / d)}[family]()
        out.update({"duty": d, "control-gain": g(d), "line-gain": v / s.vg})
        return out
    d = {"buck": m, "boost": 1 - 1 / m, "buck-boost": m / (1 + m)}[family]
    if not 0 < d < 1:
        return out
    off = 1 - d if family != "buck" else 1.0
    out.update({"duty": d, "line-gain": v / s.vg, "control-gain": {"buck": v / d, "boost": v / off, "buck-boost": v / d / off}[family]})
    if s.two:
        return out
    out["resonance"] = off / math.sqrt(s.l * c) / (2 * np.pi)
    out["quality"] = off * r * math.sqrt(c / s.l)
    if family != "buck":
        out["rhp-zero"] = off * off * r / s.l / (2 * np.pi) / (d if family == "buck-boost" else 1)
    return out


def filter_ratios(s, p, modulator, c):
    """Return the largest |Zo/ZN| and |Zo/ZD| up to ff/2 and the filter's own highest quality (theory sheet section 9)."""
    inductance, resistance, shunts = s.filter
    bare = s.without_filter(p.terminal)
    if p.mode == "ccm":
        inner = model.continuous(bare, p.duty, p.x[:len(p.x) - 1 - len(shunts)])
    else:
        inner = model.Point()
        inner.mode, inner.duty, inner.peak, inner.terminal = "dcm", p.duty, p.peak, p.terminal
        inner.linear = model.pulse_linear(bare, p.x[:1 + len(s.banks)], p.duty)
    lin, o = inner.linear, inner.linear.outputs
    sense = s.turns * modulator.get("current-sense-gain", 0) / s.phases
    d, T = p.duty, s.T

    def ratios(f):
        sv = 2j * np.pi * np.asarray(f)
        zo = 1 / (1 / (resistance + sv * inductance) + sum(1 / (r + 1 / (sv * k)) for k, r in shunts))
        vo_d, ig_d = lin.responses(sv, ["vo", "ig"])
        vo_g, ig_g = lin.to_input(sv, ["vo", "ig"])
        duty_g = 0.0
        if modulator["scheme"] == "peak-current-mode":
            gain = 1 / (sum(c.slopes) * T)
            rise, fall = control.ideal_slopes(s, inner)
            if p.mode == "ccm":
                fed = control.combine([(-d * T * sense * (1 - d / 2), rise), ((1 - d) ** 2 * T * sense / 2, fall)])
                current = sense * (1 - sv * T / 2 + (sv * T / np.pi) ** 2)
            else:
                fed, current = control.combine([(-d * T * sense, rise)]), 0.0
            extra = model.Linear(lin.a, lin.b, lin.g, dict(o, fed=fed, now=o.get("is", fed)))
            fed_d, now_d = extra.responses(sv, ["fed", "now"])
            fed_g, now_g = extra.to_input(sv, ["fed", "now"])
            duty_g = gain * (fed_g - current * now_g) / (1 - gain * (fed_d - current * now_d))
        elif modulator.get("feed-forward"):
            duty_g = -d / p.terminal
        return np.abs(zo * (ig_g - ig_d * vo_g / vo_d)), np.abs(zo * (ig_g + ig_d * duty_g))
    top = s.ff / 2
    sharp = [z for z in np.concatenate([np.linalg.eigvals(lin.a), model.zeros(lin.a, lin.b, *o["vo"][:2])]) if z.imag > 0]
    own = filter_poles(s)
    f = [np.geomspace(1e-6 * s.ff, top, 4000)]
    for z in sharp + own:
        f.append((abs(z) + np.linspace(-20, 20, 801) * min(abs(z.real), abs(z) / 20)) / (2 * np.pi))
    f = np.unique(np.concatenate(f))
    f = f[(f > 0) & (f <= top)]
    best = []
    for which, values in enumerate(ratios(f)):
        i = int(np.argmax(values))
        a, b = f[max(i - 1, 0)], f[min(i + 1, len(f) - 1)]
        found = minimize_scalar(lambda x: -ratios([x])[which][0], bounds=(a, b), method="bounded", options={"xatol": 1e-9 * b})
        best.append(max(values[i], -found.fun))
    quality = max([abs(z) / (-2 * z.real) for z in own], default=None)
    return {"zo-over-zn": best[0], "zo-over-zd": best[1], "quality": quality}


def filter_poles(s):
    """Return the complex pole pairs (upper ones) of the input filter alone: the roots of its admittance sum."""
    inductance, resistance, shunts = s.filter
    den, num = np.array([1.0]), np.array([0.0])
    for c, r in shunts:  # Σ s c/(1 + s r c)
        factor = np.array([r * c, 1.0])
        num = np.polyadd(np.polymul(num, factor), np.polymul(den, [c, 0.0]))
        den = np.polymul(den, factor)
    poles = np.roots(np.polyadd(den, np.polymul([inductance, resistance], num)))
    return [z for z in poles if z.imag > 1e-9 * abs(z)]
