"""Quantities at the door: text such as ``"58 mm"`` into the unit used inside, and back into text that reads again.

A strict pattern decides what is a quantity; the units library only ever sees a unit from the lists below, so it never
gets the chance to guess. Inside: mm, N, N/mm, rad, MPa, kg, kg/m³, rad/s, mm/s², N·mm, kg·mm², s, V, ohm, N·mm/A.
"""

from __future__ import annotations

import difflib
import math
import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import TYPE_CHECKING, Any, Literal

from parts.problems import Problem, Refused, written

if TYPE_CHECKING:
    from pint import UnitRegistry

Units = Literal["metric", "us"]


@dataclass(frozen=True, slots=True)
class Kind:
    """One kind of quantity. ``units`` maps each accepted spelling to the expression the units library is given."""

    noun: str
    internal: str
    bare: str  # the unit that a number without one has
    units: Mapping[str, str]
    metric: str  # the spelling shown to people
    us: str


def _same(*spellings: str) -> dict[str, str]:
    return {spelling: spelling for spelling in spellings}


_STIFFNESS = Kind(
    "a spring rate", "N/mm", "N/mm", _same("N/mm", "N/m", "kN/m", "kN/mm", "lbf/in", "lbf/ft"), "N/mm", "lbf/in"
)
_TORQUE_UNITS = {
    "N·m": "N*m", "Nm": "N*m", "N·mm": "N*mm", "Nmm": "N*mm", "kN·m": "kN*m", "kNm": "kN*m",
    "lbf·ft": "lbf*ft", "lbf·in": "lbf*in",
}  # fmt: skip

KINDS: Mapping[str, Kind] = {
    "length": Kind("a length", "mm", "mm", _same("mm", "cm", "m", "um", "in", "ft"), "mm", "in"),
    "force": Kind("a force", "N", "N", _same("N", "kN", "MN", "lbf", "kip", "kgf"), "N", "lbf"),
    "rate": _STIFFNESS,
    "stiffness": Kind("a stiffness", _STIFFNESS.internal, _STIFFNESS.bare, _STIFFNESS.units, "N/mm", "lbf/in"),
    "angle": Kind("an angle", "rad", "deg", _same("deg", "rad", "mrad", "turn"), "deg", "deg"),
    "stress": Kind(
        "a stress",
        "MPa",
        "MPa",
        _same("MPa", "GPa", "kPa", "Pa", "bar", "psi", "ksi") | {"N/mm2": "N/mm**2", "N/mm^2": "N/mm**2"},
        "MPa",
        "ksi",
    ),
    "mass": Kind("a mass", "kg", "kg", _same("kg", "g", "t", "lb"), "kg", "lb"),
    "mass_per_length": Kind("a mass a length", "kg/m", "kg/m", _same("kg/m", "g/m", "lb/ft"), "kg/m", "lb/ft"),
    "density": Kind(
        "a density",
        "kg/m**3",
        "kg/m3",
        {"kg/m3": "kg/m**3", "kg/m^3": "kg/m**3", "g/cm3": "g/cm**3", "g/cm^3": "g/cm**3",
         "lb/in3": "lb/in**3", "lb/in^3": "lb/in**3"},
        "kg/m3",
        "lb/in3",
    ),
    "speed": Kind("a speed of rotation", "rad/s", "rpm", _same("rpm", "rad/s", "deg/s"), "rpm", "rpm"),
    "acceleration": Kind(
        "an acceleration",
        "mm/s**2",
        "m/s2",
        {"m/s2": "m/s**2", "m/s^2": "m/s**2", "mm/s2": "mm/s**2", "mm/s^2": "mm/s**2",
         "ft/s2": "ft/s**2", "ft/s^2": "ft/s**2", "in/s2": "in/s**2", "in/s^2": "in/s**2"},
        "m/s2",
        "ft/s2",
    ),
    "pace": Kind(
        "a speed", "mm/s", "m/s", {"m/s": "m/s", "mm/s": "mm/s", "m/min": "m/min", "ft/s": "ft/s"}, "m/s", "ft/s"
    ),
    "torque": Kind("a torque", "N*mm", "N·m", _TORQUE_UNITS, "N·m", "lbf·ft"),
    "energy": Kind(
        "an energy", "N*mm", "J", {"J": "N*m", "kJ": "kN*m", "ft·lbf": "lbf*ft", "in·lbf": "lbf*in"}, "J", "ft·lbf"
    ),
    "inertia": Kind(
        "a moment of inertia",
        "kg*mm**2",
        "kg·m2",
        {"kg·m2": "kg*m**2", "kg·m²": "kg*m**2", "kg·cm2": "kg*cm**2", "kg·cm²": "kg*cm**2", "g·cm2": "g*cm**2",
         "g·cm²": "g*cm**2", "kg·mm2": "kg*mm**2", "kg·mm²": "kg*mm**2", "lb·in2": "lb*in**2", "lb·ft2": "lb*ft**2"},
        "kg·m2",
        "lb·in2",
    ),
    "time": Kind("a time", "s", "s", _same("s", "ms", "min"), "s", "s"),
    "voltage": Kind("a voltage", "V", "V", _same("V", "mV", "kV"), "V", "V"),
    "resistance": Kind("a resistance", "ohm", "ohm", {"ohm": "ohm", "Ω": "ohm", "mohm": "mohm", "mΩ": "mohm"}, "ohm", "ohm"),
    "torque_constant": Kind(
        "a torque constant",
        "N*mm/A",
        "N·m/A",
        {"N·m/A": "N*m/A", "Nm/A": "N*m/A", "mN·m/A": "N*mm/A", "mNm/A": "N*mm/A", "lbf·in/A": "lbf*in/A"},
        "N·m/A",
        "lbf·in/A",
    ),
}  # fmt: skip

# Length, force, mass, angle and time stand on their own: nothing here turns a mass into a force.
_DEFINITIONS = (
    "mm = [length]", "um = 0.001 mm", "cm = 10 mm", "m = 1000 mm", "in = 25.4 mm", "ft = 304.8 mm",
    "N = [force]", "kN = 1000 N", "MN = 1000000 N", "lbf = 4.4482216152605 N", "kip = 1000 lbf", "kgf = 9.80665 N",
    "kg = [mass]", "g = 0.001 kg", "t = 1000 kg", "lb = 0.45359237 kg",
    "rad = [angle]", "mrad = 0.001 rad", f"deg = {math.pi / 180!r} rad", f"turn = {math.tau!r} rad",
    "MPa = N / mm ** 2", "GPa = 1000 MPa", "kPa = 0.001 MPa", "Pa = 0.000001 MPa", "bar = 0.1 MPa",
    "psi = lbf / in ** 2", "ksi = 1000 psi",
    "s = [time]", "ms = 0.001 s", "min = 60 s", f"rpm = {math.tau / 60!r} rad / s",
    "A = [current]", "V = N * m / s / A", "mV = 0.001 V", "kV = 1000 V", "ohm = V / A", "mohm = 0.001 ohm",
)  # fmt: skip

# Other spellings of an accepted unit, of the same size; where one stands for two, the kind wanted tells them apart.
_MEANT: Mapping[str, tuple[str, ...]] = {
    '"': ("in",), "″": ("in",), "''": ("in",), "inch": ("in",), "inches": ("in",), "'": ("ft",), "feet": ("ft",),
    "µm": ("um",), "μm": ("um",), "micron": ("um",), "microns": ("um",), "meter": ("m",), "metre": ("m",),
    "°": ("deg",), "degree": ("deg",), "degrees": ("deg",), "rev": ("turn",),
    "lb": ("lbf",), "lbs": ("lbf", "lb"), "pound": ("lbf", "lb"), "kg": ("kgf",), "kp": ("kgf",), "kips": ("kip",),
    "lb/in": ("lbf/in",), "lbs/in": ("lbf/in",), "lb/ft": ("lbf/ft",),
    "newton": ("N",), "newtons": ("N",), "tonne": ("t",),
    "N/mm²": ("N/mm2",), "N/m2": ("Pa",), "lb/in2": ("psi",),
    "lbf/in2": ("psi",), "kg/m³": ("kg/m3",), "g/cm³": ("g/cm3",), "m/s²": ("m/s2",), "m/s/s": ("m/s2",),
    "1/min": ("rpm",), "U/min": ("rpm",), "rev/min": ("rpm",), "°/s": ("deg/s",),
    "kgm2": ("kg·m2",), "kgm²": ("kg·m2",), "kg*m2": ("kg·m2",), "gcm2": ("g·cm2",), "sec": ("s",),
    "volt": ("V",), "volts": ("V",), "ohms": ("ohm",), "N*m/A": ("N·m/A",),
}  # fmt: skip

_NUMBER = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_QUANTITY = re.compile(rf"({_NUMBER}) ?([^\s0-9.,+\-][^\s]*)")
_PLAIN = re.compile(_NUMBER)
_COMMA = re.compile(r"([+-]?[0-9]+),([0-9]+) ?([^\s0-9,.]\S*)?")
_FRACTION = re.compile(r"(?:([0-9]+)[ -])?([0-9]+)/([0-9]+) ?([^\s0-9].*)?")
_LENGTH_SAID = re.compile(rf'(?<![\w."])({_NUMBER}) mm(?![\w"/²³·^])')
_SPACED = re.compile(r"([+-]?[0-9]{1,3}(?: [0-9]{3})+(?:\.[0-9]*)?) ?([^\s0-9]\S*)?")


def read_quantity(value: object, kind: str) -> float:
    """A quantity from a design file in the unit used inside.

    ``value`` is a bare number (in the kind's bare unit) or text of one number, at most one space and one accepted unit.
    Raises :class:`Refused`, with what was found and what would be accepted, for anything else.
    """
    wanted = KINDS[kind]
    if isinstance(value, bool) or not isinstance(value, (int, float, str)):
        raise Refused(written(value), f"{wanted.noun} such as {_example(wanted)}")
    if isinstance(value, str):
        match = _QUANTITY.fullmatch(value)
        if match is None or match[2] not in wanted.units:
            raise _refusal(value, match, wanted)
        number, unit = float(match[1]), match[2]
    else:
        number, unit = _as_float(value), wanted.bare
    if not math.isfinite(result := number * factor(kind, unit)):
        raise Refused(written(value), f"{wanted.noun} that is a finite number, such as {_example(wanted)}")
    return result


def read_number(text: str) -> float | None:
    """A plain ASCII number without a unit, or None where the text is anything else or not finite."""
    if _PLAIN.fullmatch(text) is None or not math.isfinite(number := float(text)):
        return None
    return number


def show(value: float | str, kind: str, units: Units) -> str:
    """A value from the inside as people are shown it; for a kind of quantity the text can be read back.

    Six significant figures or more. ``kind`` may also be ``"number"``, ``"count"`` or ``"text"``, which have no unit.
    """
    if isinstance(value, str):
        return value
    if kind not in KINDS:
        return _digits(value)
    unit = KINDS[kind].metric if units == "metric" else KINDS[kind].us
    if unit == "N" and abs(value) >= 1e4:
        unit = "kN"
    return f"{_digits(value / factor(kind, unit))} {unit}"


def in_brief(value: float, kind: str, units: Units, figures: int = 3) -> str:
    """A value from the inside in a few figures and without an exponent, in the design's unit; not to be read back.

    >>> in_brief(12345.6, "length", "metric")
    '12300 mm'
    """
    unit = KINDS[kind].metric if units == "metric" else KINDS[kind].us
    return f"{float(f'{value / factor(kind, unit):.{figures}g}'):.10g} {unit}"


def with_inches(text: str) -> str:
    """A message with its lengths in inches as well; what stands in quotes is the file's own wording and is left alone.

    >>> with_inches('found 25.4 mm')
    'found 25.4 mm (1 in)'
    """
    return _LENGTH_SAID.sub(lambda said: f"{said[0]} ({show(float(said[1]), 'length', 'us')})", text)


def problem_with_inches(problem: Problem) -> Problem:
    """What was found and what is accepted with their lengths in inches as well, for a design in US units."""
    return replace(problem, found=with_inches(problem.found), accepted=with_inches(problem.accepted))


@lru_cache(maxsize=256)
def factor(kind: str, unit: str) -> float:
    """How many of the unit used inside make one ``unit`` of this kind."""
    return float(_registry().convert(1.0, KINDS[kind].units[unit], KINDS[kind].internal))


@lru_cache(maxsize=1)
def _registry() -> UnitRegistry[Any]:
    import pint  # a fifth of a second, so only when a quantity is read

    registry: UnitRegistry[Any] = pint.UnitRegistry(None)
    for definition in _DEFINITIONS:
        registry.define(definition)
    return registry


def _as_float(value: float) -> float:
    try:
        return float(value)
    except OverflowError:
        return math.inf


def _digits(value: float) -> str:
    text = f"{value:.6g}"
    if "e" in text and 1e-9 <= abs(value) < 1e15:
        places = max(0, 5 - math.floor(math.log10(abs(value))))
        text = f"{value:.{places}f}"
        text = text.rstrip("0").rstrip(".") if "." in text else text
    return "0" if text in ("-0", "0") else text


def _example(wanted: Kind) -> str:
    return f'"{ {"deg": 3, "MPa": 650, "kg/m3": 7850}.get(wanted.metric, 58) } {wanted.metric}"'


def _refusal(text: str, match: re.Match[str] | None, wanted: Kind) -> Refused:
    """What would be accepted instead of a text that was refused, as near to what was meant as can be told."""
    units = ", ".join(wanted.units)
    is_wanted = f"{wanted.noun} is wanted"

    def refused(accepted: str, why: str = "") -> Refused:
        return Refused(written(text), accepted, why)

    known_elsewhere = match is not None and any(match[2] in kind.units for kind in KINDS.values())
    if not known_elsewhere:
        if comma := _COMMA.fullmatch(text):
            whole, rest, unit = comma[1], comma[2], comma[3] or wanted.metric
            if len(rest) == 3 and whole.lstrip("+-0"):
                return refused(f'no comma: "{whole}{rest} {unit}", or "{whole}.{rest} {unit}" if that is meant')
            return refused(f'a decimal point, not a comma: "{whole}.{rest} {unit}"')
        if (fraction := _FRACTION.fullmatch(text)) and len(text) < 24 and int(fraction[3]):
            number = int(fraction[1] or 0) + int(fraction[2]) / int(fraction[3])
            unit = _unit_meant(fraction[4] or wanted.metric, wanted)
            return refused(f'a decimal number, not a fraction: "{_digits(number)} {unit}"')
        if spaced := _SPACED.fullmatch(text):
            return refused(f'no space within the number: "{spaced[1].replace(" ", "")} {spaced[2] or wanted.metric}"')
        if _PLAIN.fullmatch(text):
            return refused(
                f"a number with its unit ({units}), or a bare number without quotes, in {wanted.bare}", is_wanted
            )
        if text in wanted.units:
            return refused(f'a number before the unit, such as "58 {text}"')
    if match is None:
        return refused(f"one number, one space at most and one unit, such as {_example(wanted)}; units: {units}")
    meant = _unit_meant(match[2], wanted)
    if meant in wanted.units:
        return refused(f'perhaps "{match[1]} {meant}"; units: {units}', is_wanted)
    near = difflib.get_close_matches(match[2], wanted.units, n=1, cutoff=0.5)
    return refused(f"{units}; the nearest is {near[0]}" if near and not known_elsewhere else units, is_wanted)


def _unit_meant(unit: str, wanted: Kind) -> str:
    """The accepted spelling of a unit of the same size, or the spelling itself where none is known."""
    candidates = [known for known in wanted.units if known == unit]
    candidates += [meant for meant in _MEANT.get(unit, ()) if meant in wanted.units]
    candidates += [known for known in wanted.units if known.lower() == unit.lower()]
    return candidates[0] if candidates else unit
