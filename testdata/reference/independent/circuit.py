"""A power stage as piecewise-linear circuit: linear rows for each part of the switching period.

State-space averaging after R. D. Middlebrook and S. Ćuk, "A general unified approach to modelling switching-converter
power stages", IEEE PESC 1976.  Everything is referred to the output side and to one equivalent phase: with N phases
the winding, switch and rectifier values are divided by N and the current is the total; primary values cross a
transformer of ratio n = Ns/Np with n² (impedances), n (voltages), 1/n (currents).
"""
import numpy as np

PLAIN_BUCK = {"buck"}
RECTIFIED = {"forward", "two-switch-forward", "push-pull", "half-bridge", "full-bridge"}  # secondary rectifiers
BUCK = PLAIN_BUCK | RECTIFIED
BOOST = {"boost", "isolated-boost"}
BUCK_BOOST = {"buck-boost", "two-switch-buck-boost", "flyback"}
TWO_INDUCTOR = {"sepic", "cuk", "zeta"}
ISOLATED = RECTIFIED | {"flyback", "isolated-boost"}
DOUBLE = {"push-pull", "half-bridge", "full-bridge", "isolated-boost"}  # the filter works at twice fs
TOPOLOGIES = sorted(BUCK | BOOST | BUCK_BOOST | TWO_INDUCTOR)

ON, OFF, IDLE = 0, 1, 2


def derating(table, volts):
    """Interpolate a bias table linearly, held flat outside."""
    if not table:
        return 1.0
    return float(np.interp(volts, [row[0] for row in table], [row[1] for row in table]))


def merge(branches):
    """Merge the R–C branches without resistance into one, put first."""
    plain = sum(c for c, r in branches if r == 0)
    rest = [(c, r) for c, r in branches if r > 0]
    return ([(plain, 0.0)] if plain else []) + rest


class Stage:
    """One assignment of numbers, seen from the output side as one equivalent phase. SI units."""

    def __init__(self, p):
        t = self.topology = p["topology"]
        self.phases = N = p.get("phases", 1)
        self.turns = n = p["turns"]["secondary"] / p["turns"]["primary"] if t in ISOLATED else 1.0
        self.drive = n / 2 if t == "half-bridge" else n
        self.ff = p["switching-frequency"] * (2 if t in DOUBLE else 1)
        self.T = 1 / self.ff
        self.vg, self.v, self.i = p["input-voltage"], abs(p["output-voltage"]), p["load"]["current"]
        behaviour = p["load"].get("behaviour", "resistive")
        self.g = {"resistive": 1.0, "constant-current": 0.0, "constant-power": -1.0}[behaviour] * self.i / self.v
        side = n * n if t in ISOLATED and p["inductor"].get("side") == "primary" else 1.0
        self.l, self.rl = side * p["inductor"]["inductance"] / N, side * p["inductor"].get("resistance", 0) / N
        self.ron = n * n * p.get("switch", {}).get("on-resistance", 0) / N
        rectifier = p.get("rectifier", {})
        self.rd, self.vf = rectifier.get("resistance", 0) / N, rectifier.get("forward-drop", 0)
        self.synchronous = rectifier.get("synchronous", False)
        self.two = t in TWO_INDUCTOR
        self.le = self.l
        if self.two:
            self.l2, self.r2 = p["second-inductor"]["inductance"] / N, p["second-inductor"].get("resistance", 0) / N
            coupling = p["coupling-capacitor"]
            pieces = coupling.get("count", 1) * N
            self.cc, self.rc = coupling["capacitance"] * pieces, coupling.get("esr", 0) / pieces
            self.le = 1 / (1 / self.l + 1 / self.l2)
        banks = p["output-capacitors"] if "output-capacitors" in p else [p["output-capacitor"]]
        self.own_banks = [(b.get("count", 1) * b["capacitance"] * derating(b.get("bias-derating"), self.v),
                           b.get("esr", 0) / b.get("count", 1)) for b in banks]
        load = (p["load"].get("capacitance", 0), p["load"].get("esr", 0))
        self.banks = merge(self.own_banks + ([load] if load[0] else []))
        f = p.get("input-filter")
        self.filter = None
        if f:
            shunts = [(f["capacitance"], f.get("esr", 0))]
            if f.get("damping-capacitance", 0) > 0:
                shunts.append((f["damping-capacitance"], f.get("damping-resistance", 0)))
            self.filter = f["inductance"], f.get("resistance", 0), merge(shunts)
        self.coefficients = self._coefficients()
        lm = p.get("magnetizing-inductance", 0)  # adds to the slope at the comparator, V/s per volt at the terminal
        self.magnetizing = 0.0
        if lm and t in RECTIFIED and "current-sense-gain" in p["modulator"]:
            self.magnetizing = p["modulator"]["current-sense-gain"] * (0.5 if t == "half-bridge" else 1.0) / lm

    def _coefficients(self):
        """Return (a, b, r, c) of each part: L di/dt = a m vt − b vo − r i − c VF, current b i into the output."""
        t, on, off = self.topology, self.rl + self.ron, self.rl + self.rd
        if t in PLAIN_BUCK:
            return (1, 1, on, 0), (0, 1, off, 1)
        if t in RECTIFIED:
            return (1, 1, on + self.rd, 1), (0, 1, off, 1)
        if t in BOOST:
            return (1, 0, on, 0), (1, 1, off + (self.ron if t == "isolated-boost" else 0), 1)
        return (1, 0, on, 0), (0, 1, off, 1)

    def without_filter(self, terminal):
        """Return the bare stage fed with the voltage at its own terminal."""
        other = object.__new__(Stage)
        other.__dict__.update(self.__dict__, filter=None, vg=terminal)
        return other

    def inputs(self, g):
        """Return u = [input voltage, load current that does not depend on vo, 1]."""
        return np.array([self.vg, self.i - g * self.v, 1.0])


class Part:
    """The rows of one part of the period over [x; u]: dx = state derivatives, vo, ig, vt."""

    def __init__(self, dx, vo, ig, vt):
        self.dx, self.vo, self.ig, self.vt = np.array(dx), vo, ig, vt


def node(shunts, inflow, states, g=0.0, extra=0.0):
    """Return (voltage, derivatives) of a node with R–C branches to ground and a conductance g.

    The branch without resistance, if any, is first.  `inflow` is the current into the node from everything else.
    """
    if shunts[0][1] == 0:
        v = states[0]
        through = [(v - s) / r for (c, r), s in zip(shunts[1:], states[1:])]
        first = (inflow - g * v - sum(through)) / shunts[0][0]
        return v, [first] + [i / c for i, (c, _) in zip(through, shunts[1:])]
    v = (inflow + sum(s / r for (_, r), s in zip(shunts, states))) / (g + sum(1 / r for _, r in shunts))
    return v, [(v - s) / r / c for (c, r), s in zip(shunts, states)]


def part(s, which, g):
    """Return the rows of one part of the period with small-signal load conductance g."""
    currents = 3 if s.two else 1  # two inductors bring the coupling capacitor along
    filter_states = 1 + len(s.filter[2]) if s.filter else 0
    order = currents + len(s.banks) + filter_states
    unit = np.eye(order + 3)
    x = unit[:order]
    vg, io, one = unit[order:]
    zero = 0 * one
    if s.two:
        i1, i2, vc = x[:3]
        both = i1 + i2
        source = {"sepic": both if which == OFF else zero}.get(s.topology, i2)
        drawn = {"zeta": both if which == ON else zero}.get(s.topology, i1)
    else:
        a, b, r, c = s.coefficients[which] if which != IDLE else (0, 0, 0, 0)
        source, drawn = b * x[0], a * s.drive * x[0]
    vo, bank_rates = node(s.banks, source - io, x[currents:currents + len(s.banks)], g)
    vt, filter_rates = vg, []
    if s.filter:
        inductance, resistance, shunts = s.filter
        through = x[currents + len(s.banks)]
        vt, rates = node(shunts, through - drawn, x[currents + len(s.banks) + 1:])
        filter_rates = [(vg - resistance * through - vt) / inductance] + rates
    if s.two:
        rates = _two_inductor_rates(s, which, i1, i2, vc, vt, vo, one)
    elif which == IDLE:
        rates = [zero]
    else:
        rates = [(a * s.drive * vt - b * vo - r * x[0] - c * s.vf * one) / s.l]
    return Part(rates + bank_rates + filter_rates, vo, drawn, vt)


def _two_inductor_rates(s, which, i1, i2, vc, vt, vo, one):
    """Return i1', i2' and the coupling capacitor's vc' of sepic, cuk or zeta."""
    both = i1 + i2
    if which == ON:
        common = -s.ron * both
        second = vc - (s.rc + s.r2) * i2 + common
        if s.topology == "cuk":
            second = second - vo
        if s.topology == "zeta":
            second = second + vt - vo
        return [(vt - s.rl * i1 + common) / s.l, second / s.l2, -i2 / s.cc]
    common = -s.vf * one - s.rd * both
    first = -(s.rl + s.rc) * i1 - vc + common
    if s.topology != "zeta":
        first = first + vt
    if s.topology == "sepic":
        first = first - vo
    return [first / s.l, (-s.r2 * i2 + common - vo) / s.l2, i1 / s.cc]
