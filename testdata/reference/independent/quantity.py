"""Designs as nested dictionaries of the spec format, read without the program.

A design is what a JSON reader makes of a spec file: quantities are numbers in SI units or strings with a unit, each
perhaps with a spread.  `nominal` turns a design into plain SI numbers, `spreads` lists what has a spread, and
`assign` sets fields by their dotted path.
"""
import copy
import math
import re

PREFIX = {"": 1.0, "p": 1e-12, "n": 1e-9, "u": 1e-6, "µ": 1e-6, "μ": 1e-6, "m": 1e-3, "k": 1e3, "K": 1e3, "M": 1e6, "G": 1e9}
UNITS = ("V/A", "A/V", "Hz", "ohm", "deg", "H", "F", "V", "A", "S", "s", "Ω", "Ω", "R", "°")
NUMBER = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?"
LETTER_CODE = re.compile(r"^(\d*)([RrkKmMGunpµμ])(\d*)$")  # IEC 60062
TOLERANCE = re.compile(rf"^(.*?)\s*(?:(?:±|\+/-)\s*({NUMBER})|\+({NUMBER})/-({NUMBER}))\s*%$")
NAMES = {"title", "topology", "behaviour", "side", "scheme", "network", "kind", "conduction", "led-supply", "flux-balance"}
LEFT_OUT = {"title", "stated", "targets", "waivers", "designed-for", "measured-loop", "format"}


def value_of(text):
    """Return a quantity without spread in SI units; decibels become a plain ratio."""
    text = text.strip()
    code = LETTER_CODE.match(text)
    if code and (code[1] or code[3]):
        return float(f"{code[1] or 0}.{code[3] or 0}") * (1.0 if code[2] in "Rr" else PREFIX[code[2]])
    fraction = re.match(rf"^({NUMBER})/({NUMBER})$", text)
    if fraction:
        return float(fraction[1]) / float(fraction[2])
    found = re.match(rf"^({NUMBER})\s*(.*)$", text)
    if not found:
        raise ValueError(f"not a quantity: {text!r}")
    number, unit = float(found[1]), found[2]
    if unit == "%":
        return number / 100
    if unit == "dB":
        return 10 ** (number / 20)
    slope = re.match(r"^([pnuµμmkMG]?)V/([pnuµμmkMG]?)s$", unit)
    if slope:
        return number * PREFIX[slope[1]] / PREFIX[slope[2]]
    if unit in PREFIX and unit != "m":
        return number * PREFIX[unit]
    for name in UNITS:
        if unit.endswith(name) and unit[: -len(name)] in PREFIX:
            return number * PREFIX[unit[: -len(name)]]
    raise ValueError(f"unknown unit: {text!r}")


def spread_of(value):
    """Return (min, nominal, max) of a quantity as written: number, string, {value, tolerance} or {min, nominal, max}."""
    if isinstance(value, (int, float)):
        return float(value), float(value), float(value)
    if isinstance(value, dict):
        if "value" in value:
            centre = spread_of(value["value"])[1]
            t = value.get("tolerance", 0)
            t = value_of(t) if isinstance(t, str) else float(t)
            return centre * (1 - t), centre, centre * (1 + t)
        low, high = spread_of(value["min"])[1], spread_of(value["max"])[1]
        return low, spread_of(value["nominal"])[1] if "nominal" in value else (low + high) / 2, high
    parts = TOLERANCE.match(value)
    if not parts:
        v = value_of(value)
        return v, v, v
    centre = value_of(parts[1])
    up = float(parts[2] or parts[3]) / 100
    down = float(parts[2] or parts[4]) / 100
    return centre * (1 - down), centre, centre * (1 + up)


def is_quantity(key, value):
    """Say whether the value under a key is one quantity rather than a section, a name or a list."""
    if isinstance(value, bool) or key in NAMES:
        return False
    if isinstance(value, dict):
        return "value" in value or ("min" in value and "max" in value)
    return isinstance(value, (int, float, str))


def walk(node, path=()):
    """Yield (path, parent, key, quantity) for every quantity below a node."""
    items = node.items() if isinstance(node, dict) else enumerate(node)
    for key, value in items:
        here = path + (str(key),)
        if len(path) == 0 and key in LEFT_OUT:
            continue
        if is_quantity(key, value):
            yield here, node, key, value
        elif isinstance(value, (dict, list)):
            yield from walk(value, here)


def nominal(design):
    """Return a copy of a design in which every quantity is its nominal SI number."""
    out = copy.deepcopy(design)
    for _, parent, key, value in list(walk(out)):
        parent[key] = spread_of(value)[1]
    return out


def spreads(design):
    """Return {dotted path: (min, nominal, max)} of every quantity of the converter that has a spread."""
    out = {}
    for path, _, _, value in walk(design):
        if path[:2] == ("modulator", "duty-limit") or path[-1] in ("current-limit", "output-range"):
            continue  # limits, not tolerances
        low, mid, high = spread_of(value)
        if high > low and not math.isclose(high, low, rel_tol=1e-15):
            out[".".join(path)] = (low, mid, high)
    return out


def assign(point, settings):
    """Set fields of a nominal design by their dotted paths, in place."""
    for path, value in settings.items():
        node = point
        *sections, last = path.split(".")
        for name in sections:
            node = node[int(name)] if isinstance(node, list) else node[name]
        node[int(last) if isinstance(node, list) else last] = value
    return point
