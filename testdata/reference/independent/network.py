"""Compensators as frequency responses, written from impedances (the inversion of the loop left out)."""
import math

import numpy as np


def impedance_of_feedback(q, s):
    """Zf = (R2 + 1/sC1) ∥ 1/sC2; type-1 has C1 alone."""
    if q["network"] == "type-1":
        return 1 / (s * q["integrator-capacitor"])
    z = q.get("feedback-resistor", 0) + 1 / (s * q["integrator-capacitor"])
    return 1 / (1 / z + s * q.get("rolloff-capacitor", 0))


def impedance_of_input(q, s):
    """Zi = R1, with the lead branch R3 + 1/sC3 across it where there is one."""
    if not q.get("lead-capacitor"):
        return q["upper-resistor"] + 0 * s
    return 1 / (1 / q["upper-resistor"] + 1 / (q["lead-resistor"] + 1 / (s * q["lead-capacitor"])))


def amplifier_data(q):
    """Return (A0, gain-bandwidth in Hz), None where the amplifier is ideal; infinite where unlimited."""
    a = q.get("amplifier", {})
    gain, bandwidth = a.get("open-loop-gain", 0), a.get("gain-bandwidth", 0)
    if not gain and not bandwidth:
        return None
    return gain or 1e6, bandwidth or math.inf


def operational(q, s):
    """Zf/Zi, divided by 1 + (1 + Zf/(Zi ∥ RL))/A(s) with a finite amplifier, A(s) = A0/(1 + s A0/ωgb)."""
    zf, zi = impedance_of_feedback(q, s), impedance_of_input(q, s)
    h = zf / zi
    data = amplifier_data(q)
    if data:
        lower = 1 / q["lower-resistor"] if q.get("lower-resistor") else 0
        h = h / (1 + (1 + zf * (1 / zi + lower)) * (1 / data[0] + s / (2 * math.pi * data[1])))
    return h


def transconductance(q, s):
    """gm·Zc·RL/(RL + Zi), Zc = ro ∥ (R2 + 1/sC1) ∥ 1/sC2."""
    ro = 1 / q["output-resistance"] if q.get("output-resistance") else 0
    zc = 1 / (1 / impedance_of_feedback(q, s) + ro)
    return q["transconductance"] * zc * q["lower-resistor"] / (q["lower-resistor"] + impedance_of_input(q, s))


def optocoupler(q, s):
    """CTR·Rpu/Rled·(1 + Zf/R1)/(1 + s Rpu C2)/(1 + s/ωopto); without the 1 where the LED hangs on a fixed rail."""
    zf = q.get("feedback-resistor", 0) + 1 / (s * q["integrator-capacitor"])
    h = (0 if q.get("led-supply") == "fixed" else 1) + zf / q["upper-resistor"]
    h = h * q["current-transfer-ratio"] * q["pull-up-resistor"] / q["led-resistor"]
    h = h / (1 + s * q["pull-up-resistor"] * q.get("rolloff-capacitor", 0))
    return h / (1 + s / (2 * math.pi * q["optocoupler-pole"])) if q.get("optocoupler-pole") else h


def direct(q, s):
    """sense·gain·(ωi/s)·Π(1 + s/ωz)/Π(1 + s/ωp), a pair being 1 + s/(Q ω0) + (s/ω0)²."""
    def factor(root):
        if isinstance(root, dict):
            w = 2 * math.pi * root["frequency"]
            return 1 + s / (root["quality"] * w) + (s / w) ** 2
        return 1 + s / (2 * math.pi * root)
    h = q.get("gain", 1.0) * q.get("sense-gain", 1.0) + 0 * s
    if q.get("integrator"):
        h = h * 2 * math.pi * q["integrator"] / s
    for z in q.get("zeros", []):
        h = h * factor(z)
    for p in q.get("poles", []):
        h = h / factor(p)
    return h


def digital(q, s):
    """sense·N(z⁻¹)/D(z⁻¹)·e^(−s·delay) at z = e^(s/fsampling)."""
    back = np.exp(-s / q["sampling-frequency"])
    n, d = q["numerator"][::-1], q["denominator"][::-1]
    return q.get("sense-gain", 1.0) * np.polyval(n, back) / np.polyval(d, back) * np.exp(-s * q.get("delay", 0))


RESPONSE = {"type-1": operational, "type-2": operational, "type-3": operational, "transconductance": transconductance,
            "optocoupler": optocoupler, "transfer-function": direct, "digital": digital}


def response(q, s):
    """Return C(s) for an array of complex frequencies."""
    return RESPONSE[q["network"]](q, s)


def integrators(q):
    """Return how many poles C(s) has at the origin (digital: at z = 1)."""
    kind = q["network"]
    if kind in ("type-1", "type-2", "type-3"):
        return 0 if amplifier_data(q) else 1
    if kind == "transconductance":
        return 0 if q.get("output-resistance") else 1
    if kind == "optocoupler":
        return 1
    if kind == "transfer-function":
        return 1 if q.get("integrator") else 0
    return int(np.sum(np.abs(np.roots(q["denominator"]) - 1) < 1e-7))


def unstable_poles(q):
    """Return how many poles C(s) has in the right half-plane (digital: outside the unit circle)."""
    if q["network"] != "digital":
        return 0
    z = np.roots(q["denominator"])
    return int(np.sum((np.abs(z) > 1) & (np.abs(z - 1) >= 1e-7)))


def set_point(q):
    """Return Vref·(1 + R1/RL), None where a part is missing."""
    if q.get("reference-voltage") and q.get("upper-resistor") and q.get("lower-resistor"):
        return q["reference-voltage"] * (1 + q["upper-resistor"] / q["lower-resistor"])
    return None
