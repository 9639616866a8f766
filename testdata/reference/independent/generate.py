"""Random believable designs in the spec format, with tolerances and operating ranges, and one assignment inside them."""
import math

import quantity
from circuit import BOOST, BUCK, DOUBLE, ISOLATED, RECTIFIED, TWO_INDUCTOR

TURN = 2 * math.pi


class Draw:
    """Random choices around one generator."""

    def __init__(self, rng):
        self.rng = rng

    def log(self, low, high):
        return math.exp(self.rng.uniform(math.log(low), math.log(high)))

    def chance(self, p):
        return self.rng.random() < p

    def one_of(self, *choices):
        return self.rng.choice(choices)

    def part(self, value, unit="", often=0.6):
        """Return a value as a person might write it: number, prefix and unit, with a tolerance or a range or without."""
        value = float(f"{value:.4g}")
        if value == 0:
            return value
        if not self.chance(often):
            return value
        style = self.rng.randrange(4)
        if style == 0:
            return {"min": round_to(value * self.rng.uniform(0.6, 0.95)), "nominal": value, "max": round_to(value * self.rng.uniform(1.05, 1.6))}
        if style == 1:
            return {"value": value, "tolerance": self.one_of("20 %", 0.1, "5 %", 0.01)}
        text = written(value, unit) if unit else repr(value)
        if style == 2:
            return f"{text} ± {self.one_of(1, 5, 10, 20)} %"
        return f"{text} +{self.one_of(10, 30)}/-{self.one_of(10, 20)} %"


def round_to(value, digits=5):
    return float(f"{value:.{digits}g}")


def written(value, unit):
    """Return a number with an SI prefix, `22 uH`."""
    for factor, prefix in ((1e9, "G"), (1e6, "M"), (1e3, "k"), (1, ""), (1e-3, "m"), (1e-6, "u"), (1e-9, "n")):
        if value >= factor:
            return f"{round_to(value / factor)!r} {prefix}{unit}"
    return f"{round_to(value / 1e-12)!r} p{unit}"


def random_design(rng, topologies):
    """Return (design, settings): settings assign every spread, drawn inside it, sometimes at its ends."""
    draw = Draw(rng)
    t = draw.one_of(*topologies)
    isolated, two = t in ISOLATED, t in TWO_INDUCTOR
    vg = round_to(draw.log(4, 80))
    primary = draw.one_of(6, 8, 12, 20, 30)
    secondary = max(2, round(primary * draw.log(0.2, 4)))
    n = secondary / primary if isolated else 1.0
    d = rng.uniform(0.12, 0.45 if t in ("forward", "two-switch-forward") else 0.7)
    driven = vg * n * (0.5 if t == "half-bridge" else 1)
    v = round_to(driven * (d if t in BUCK else 1 / (1 - d) if t in BOOST else d / (1 - d)))
    i = round_to(draw.log(0.1, 15))
    fs = round_to(draw.log(3e4, 2e6))
    ff = fs * (2 if t in DOUBLE else 1)
    T, r = 1 / ff, v / i
    phases = draw.one_of(1, 1, 1, 2, 3)
    scheme = draw.one_of("voltage-mode", "peak-current-mode")
    discontinuous = draw.chance(0.25)
    boundary = ((1 - d) if t in BUCK else d * (1 - d) ** 2 if t in BOOST else (1 - d) ** 2) * r * T / 2
    le = draw.log(0.08, 0.7) * boundary if discontinuous else draw.log(1.3, 12) * boundary
    design = {"format": 1, "title": "Tide gauge supply, drawn at random", "topology": t, "switching-frequency": fs,
              "output-voltage": -v if t in ("buck-boost", "cuk") and draw.chance(0.5) else v}
    design["input-voltage"] = {"min": round_to(vg * rng.uniform(0.75, 1)), "nominal": vg, "max": round_to(vg * rng.uniform(1.02, 1.4))} if draw.chance(0.7) else vg
    design["load"] = {"current": {"min": round_to(i * rng.uniform(0.1, 0.9)), "nominal": i, "max": round_to(i * rng.uniform(1.02, 1.5))} if draw.chance(0.7) else i,
                      "behaviour": draw.one_of("resistive", "resistive", "constant-current", "constant-power")}
    if phases > 1:
        design["phases"] = phases
    if isolated:
        design["turns"] = {"primary": primary, "secondary": secondary}
    stage_parts(draw, design, le, r, n, phases)
    output_parts(draw, design, T, r, v)
    design["switch"] = {"on-resistance": draw.part(draw.log(0.001, 0.02) * r * phases / n ** 2, "ohm", 0.3)}
    synchronous = not discontinuous and draw.chance(0.6)
    design["rectifier"] = {"resistance": draw.part(draw.log(0.001, 0.02) * r * phases, "ohm", 0.3), "synchronous": synchronous}
    if not synchronous:
        design["rectifier"]["forward-drop"] = draw.one_of(0, 0.35, draw.part(0.6, "V"))
    if draw.chance(0.25):
        design["input-filter"] = input_filter(draw, vg * vg / (v * i), ff)
    on_volts = driven - v if t in BUCK else driven
    modulator(draw, design, scheme, on_volts / le, i / (1 - d), n if isolated else 1, phases)
    capacitance = sum(c["capacitance"] * c.get("count", 1) for c in nominal_banks(design))
    f0 = (1 if t in BUCK else 1 - d) / math.sqrt(le * capacitance) / TURN
    if scheme == "peak-current-mode":
        f0 = ff * draw.log(0.002, 0.02)
    design["compensator"] = compensator(draw, f0, fs, scheme)
    settings = {}
    corner = draw.chance(0.3)
    for path, (low, mid, high) in quantity.spreads(design).items():
        settings[path] = draw.one_of(low, high) if corner else draw.one_of(low, mid, high, rng.uniform(low, high), rng.uniform(low, high))
    if not settings:
        settings["input-voltage"] = vg
    return design, settings


def nominal_banks(design):
    plain = quantity.nominal(design)
    return plain["output-capacitors"] if "output-capacitors" in plain else [plain["output-capacitor"]]


def stage_parts(draw, design, le, r, n, phases):
    """Add the inductors and the coupling capacitor. le: henries of the equivalent phase on the output side."""
    t = design["topology"]
    if t in TWO_INDUCTOR:
        for name in ("inductor", "second-inductor"):
            design[name] = {"inductance": draw.part(2 * le * phases * draw.log(0.6, 1.6), "H"), "resistance": round_to(draw.log(0.001, 0.02) * r * phases)}
        v, i = abs(design["output-voltage"]), quantity.spread_of(design["load"]["current"])[1]
        c = draw.log(1, 40) * i / design["switching-frequency"] / v / phases
        design["coupling-capacitor"] = {"capacitance": draw.part(c, "F"), "esr": draw.part(draw.log(0.002, 0.05) * r * phases, "ohm")}
        return
    side = draw.one_of("primary", "secondary") if t in ISOLATED else None
    scale = n * n if side == "primary" else 1
    design["inductor"] = {"inductance": draw.part(le * phases / scale, "H"), "resistance": draw.part(draw.log(0.001, 0.02) * r * phases / scale, "ohm", 0.3)}
    if side:
        design["inductor"]["side"] = side
    if t in RECTIFIED and draw.chance(0.4):
        design["magnetizing-inductance"] = draw.part(le * phases / n ** 2 * draw.log(10, 100), "H", 0.3)


def output_parts(draw, design, T, r, v):
    """Add the output capacitors, and now and then what the load brings."""
    total = draw.log(5, 400) * T / r * (1 if design["topology"] in BUCK | {"cuk", "zeta"} else 3)
    banks = []
    for _ in range(draw.one_of(1, 1, 1, 2, 3)):
        count = draw.one_of(1, 2, 3)
        bank = {"capacitance": draw.part(total / count * draw.log(0.3, 2), "F")}
        esr = draw.log(0.001, 0.15) * r * count * draw.one_of(1, 1, 1, 0)
        if esr:
            bank["esr"] = draw.part(esr, "ohm")
        if count > 1:
            bank["count"] = count
        if draw.chance(0.2):
            bank["bias-derating"] = [[0, 1], [round_to(v * draw.log(0.3, 1.5)), 0.8], [round_to(v * draw.log(1.6, 4)), 0.4]]
        banks.append(bank)
    if len(banks) == 1:
        design["output-capacitor"] = banks[0]
    else:
        design["output-capacitors"] = banks
    if draw.chance(0.15):
        design["load"].update({"capacitance": draw.part(total * draw.log(0.05, 1), "F"), "esr": round_to(draw.log(0.001, 0.1) * r)})


def input_filter(draw, impedance, ff):
    """Return a filter below the converter's closed-loop input impedance, damped or not."""
    f0, z0 = ff * draw.log(0.005, 0.15), impedance * draw.log(0.02, 0.5)
    f = {"inductance": round_to(z0 / (TURN * f0)), "capacitance": round_to(1 / (TURN * f0 * z0)), "resistance": round_to(impedance * draw.log(5e-4, 5e-3))}
    if draw.chance(0.7):
        f["esr"] = round_to(z0 * draw.log(0.01, 0.3))
    if draw.chance(0.6):
        f.update({"damping-resistance": round_to(z0 * draw.log(0.4, 2.5)), "damping-capacitance": round_to(f["capacitance"] * draw.log(2, 6))})
    return f


def modulator(draw, design, scheme, on_slope, peak, n, phases):
    """Add the modulator. on_slope: A/s of the equivalent phase; peak: about the inductor current in all, A."""
    m = design["modulator"] = {"scheme": scheme}
    if scheme == "voltage-mode":
        m["ramp-amplitude"] = draw.part(draw.log(0.5, 5), "V", 0.3)
        if draw.chance(0.25):
            m["feed-forward"] = True
    else:
        sense = round_to(draw.log(0.05, 1) * phases / peak / n)
        m["current-sense-gain"] = sense
        m["slope-compensation"] = round_to(sense * n / phases * on_slope * draw.log(0.1, 2))
    if draw.chance(0.3):
        m["control-ratio"] = round_to(draw.log(0.1, 1))
    if draw.chance(0.4):
        m["delay"] = round_to(draw.log(2e-8, 0.3 / design["switching-frequency"]) if design["switching-frequency"] < 1e7 else 1e-9)


def compensator(draw, f0, fs, scheme):
    """Return a random network around a corner frequency f0 (Hz)."""
    kind = draw.one_of("type-1", "type-2", "type-3", "type-3", "transconductance", "optocoupler", "transfer-function", "digital")
    r1 = draw.log(1e3, 1e5)
    r2 = r1 * draw.log(0.05, 5)
    part = lambda value, unit: draw.part(value, unit, 0.4)
    q = {"network": kind}
    if kind == "transfer-function":
        pair = lambda f: {"frequency": round_to(f), "quality": round_to(draw.log(0.4, 3))}
        q["gain"] = round_to(draw.log(0.2, 3))
        if draw.chance(0.8):
            q["integrator"] = round_to(f0 * draw.log(0.03, 1))
        q["zeros"] = [round_to(f0 * draw.log(0.3, 2)) for _ in range(draw.one_of(0, 1, 2))]
        q["poles"] = [round_to(fs * draw.log(0.1, 1)) for _ in range(draw.one_of(1, 2, 3))]
        if draw.chance(0.2):
            q["zeros"] = [pair(f0 * draw.log(0.5, 2))]
        if draw.chance(0.2):
            q["poles"].append(pair(fs * draw.log(0.1, 1)))
        if draw.chance(0.3):
            q["sense-gain"] = round_to(draw.log(0.05, 1))
        return q
    if kind == "digital":
        # A lead–lag with integrator, mapped by z⁻¹ = 1 − sT (backward difference).
        rate = fs / draw.one_of(1, 1, 2)
        wi, wz, wp = TURN * f0 * draw.log(0.03, 1), TURN * f0 * draw.log(0.3, 2), TURN * fs * draw.log(0.1, 0.5)
        z, p = 1 / (1 + wz / rate), 1 / (1 + wp / rate)
        gain = wi / rate * (1 - p) / (1 - z)
        q.update({"sampling-frequency": rate, "numerator": [gain, -gain * z], "denominator": [1.0, -1 - p, p], "delay": round_to(draw.log(0.3, 1.5) / rate)})
        if draw.chance(0.3):
            q["sense-gain"] = round_to(draw.log(0.05, 1))
        return q
    q["upper-resistor"] = part(r1, "ohm")
    q["integrator-capacitor"] = part(1 / (TURN * r2 * f0 * draw.log(0.3, 1.5)), "F")
    if kind == "type-1":
        q["integrator-capacitor"] = part(1 / (TURN * r1 * f0 * draw.log(0.01, 0.3)), "F")
    elif kind != "optocoupler" or draw.chance(0.5):
        q["feedback-resistor"] = part(r2, "ohm")
    if kind not in ("type-1", "optocoupler") and draw.chance(0.7):
        q["rolloff-capacitor"] = part(1 / (TURN * r2 * fs * draw.log(0.1, 1)), "F")
    if kind == "type-3" or kind == "transconductance" and draw.chance(0.4):
        c3 = 1 / (TURN * r1 * f0 * draw.log(0.4, 2))
        q.update({"lead-capacitor": part(c3, "F"), "lead-resistor": part(1 / (TURN * c3 * fs * draw.log(0.1, 1)), "ohm")})
    if kind == "transconductance":
        q.update({"transconductance": part(draw.log(1e-4, 3e-3), "S"), "lower-resistor": part(r1 * draw.log(0.05, 1), "ohm")})
        if draw.chance(0.6):
            q["output-resistance"] = round_to(draw.log(3e5, 1e8))
    elif kind == "optocoupler":
        q.update({"current-transfer-ratio": draw.part(draw.log(0.3, 2)), "led-resistor": part(draw.log(300, 5000), "ohm"), "pull-up-resistor": part(draw.log(1e3, 2e4), "ohm")})
        if draw.chance(0.6):
            q["rolloff-capacitor"] = part(draw.log(1e-10, 1e-8), "F")
        if draw.chance(0.6):
            q["optocoupler-pole"] = draw.part(draw.log(3e3, 1e5), "Hz")
        if draw.chance(0.3):
            q.update({"led-supply": "fixed", "led-supply-voltage": 12})
    else:
        if draw.chance(0.5):
            q["lower-resistor"] = part(r1 / draw.log(0.5, 20), "ohm")
        amplifier = {}
        if draw.chance(0.5):
            amplifier["gain-bandwidth"] = draw.part(draw.log(5e5, 3e7), "Hz", 0.3)
        if draw.chance(0.5):
            amplifier["open-loop-gain"] = f"{round_to(draw.rng.uniform(55, 115), 4)} dB"
        if amplifier:
            q["amplifier"] = amplifier
    return q


def describe(design):
    """Return one line: topology, scheme, network and what is special."""
    words = [design["topology"], design["modulator"]["scheme"], design["compensator"]["network"], design["load"]["behaviour"]]
    words += [f"{design['phases']} phases"] if "phases" in design else []
    words += [f"{len(design['output-capacitors'])} banks"] if "output-capacitors" in design else []
    words += ["load capacitance"] if "capacitance" in design["load"] else []
    words += ["filter"] if "input-filter" in design else []
    words += ["feed-forward"] if design["modulator"].get("feed-forward") else []
    words += ["delay"] if "delay" in design["modulator"] else []
    return " ".join(words)
