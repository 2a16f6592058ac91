"""Quantities in and out: what is accepted, what is refused and with which advice, and the round trip."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from parts.problems import Refused
from parts.quantities import KINDS, Units, read_quantity, show, with_inches

ACCEPTED = [
    ("58 mm", "length", 58.0),
    ("58mm", "length", 58.0),
    ("2.25 in", "length", 57.15),
    (".5 in", "length", 12.7),
    ("-1e2 mm", "length", -100.0),
    ("1 ft", "length", 304.8),
    ("250 um", "length", 0.25),
    (58, "length", 58.0),
    (2.5, "length", 2.5),
    ("1.2 kN", "force", 1200.0),
    ("1 lbf", "force", 4.4482216152605),
    ("1 kip", "force", 4448.2216152605),
    ("2 kgf", "force", 19.6133),
    ("1200 lbf/in", "rate", 1200 * 4.4482216152605 / 25.4),
    ("210 kN/m", "rate", 210.0),
    ("3 deg", "angle", math.radians(3)),
    (3, "angle", math.radians(3)),
    ("0.5 turn", "angle", math.pi),
    ("650 MPa", "stress", 650.0),
    ("650 N/mm2", "stress", 650.0),
    ("210 GPa", "stress", 210_000.0),
    ("95 ksi", "stress", 95_000 * 4.4482216152605 / 25.4**2),
    ("12 kg", "mass", 12.0),
    ("1 lb", "mass", 0.45359237),
    ("7850 kg/m3", "density", 7850.0),
    ("7.85 g/cm3", "density", 7850.0),
    ("60 rpm", "speed", math.tau),
    (60, "speed", math.tau),
    ("180 deg/s", "speed", math.pi),
    (9.81, "acceleration", 9810.0),
    ("1 ft/s2", "acceleration", 304.8),
    ("2 N·m", "torque", 2000.0),
    ("1 J", "energy", 1000.0),
]

# What is written, the kind wanted, and what the advice has to say.
REFUSED: list[tuple[object, str, str]] = [
    ("650 Mpa", "stress", '"650 MPa"'),
    ("95 KSI", "stress", '"95 ksi"'),
    ("5 KN", "force", '"5 kN"'),
    ("5 lb", "force", '"5 lbf"'),
    ("5 kg", "force", '"5 kgf"'),
    ("1200 lb/in", "rate", '"1200 lbf/in"'),
    ("7850 kg/m³", "density", '"7850 kg/m3"'),
    ("3°", "angle", '"3 deg"'),
    ("58 N", "length", "mm, cm, m, um, in, ft"),
    ("58 deg", "length", "mm, cm, m, um, in, ft"),
    ("2 1/4 in", "length", '"2.25 in"'),
    ("2-1/4 in", "length", '"2.25 in"'),
    ("1/4 in", "length", '"0.25 in"'),
    ("1/0 in", "length", "one number"),
    ("0,5 mm", "length", '"0.5 mm"'),
    ("1,200 N", "force", '"1200 N"'),
    ("1 200 N", "force", '"1200 N"'),
    ('2.25"', "length", '"2.25 in"'),
    ("3", "length", "bare number without quotes, in mm"),
    ("3", "angle", "bare number without quotes, in deg"),
    ("58 m m", "length", "one unit"),
    ("58  mm", "length", "one space at most"),
    (" 58 mm", "length", "one number"),
    ("58 mm\n", "length", "one number"),
    ("mm", "length", "a number before the unit"),
    ("", "length", "one number"),
    ("9**9**9 mm", "length", "one number"),
    ("58 mm; import os", "length", "one number"),
    ("5 furlong", "length", "mm, cm"),
    ("٥ mm", "length", "one number"),
    ("５ mm", "length", "one number"),
    ("1_000 mm", "length", "mm, cm"),
    ("−3 deg", "angle", "one number"),
    ("nan mm", "length", "one number"),
    ("inf mm", "length", "one number"),
    ("1e999 mm", "length", "finite"),
    (math.nan, "length", "finite"),
    (math.inf, "length", "finite"),
    (10**400, "length", "finite"),
    (True, "length", "a length"),
    ([58, "mm"], "length", "a length"),
    ({"mm": 58}, "length", "a length"),
    ("0x10 mm", "length", "mm, cm"),
]


@pytest.mark.parametrize(("written", "kind", "inside"), ACCEPTED)
def test_accepted(written: object, kind: str, inside: float) -> None:
    assert read_quantity(written, kind) == pytest.approx(inside, rel=1e-12)


@pytest.mark.parametrize(("written", "kind", "advice"), REFUSED)
def test_refused_with_advice(written: object, kind: str, advice: str) -> None:
    with pytest.raises(Refused) as caught:
        read_quantity(written, kind)
    assert caught.value.found
    assert advice in caught.value.accepted


def test_wrong_kind_is_named() -> None:
    with pytest.raises(Refused) as caught:
        read_quantity("58 N", "length")
    assert (caught.value.text, caught.value.found) == ("a length is wanted", '"58 N"')


def test_every_listed_unit_is_known_to_the_library() -> None:
    for kind, known in KINDS.items():
        assert {known.bare, known.metric, known.us} <= set(known.units)
        for unit in known.units:
            assert read_quantity(f"1 {unit}", kind) > 0


@pytest.mark.parametrize(
    ("value", "kind", "units", "text"),
    [
        (73.4, "length", "metric", "73.4 mm"),
        (57.15, "length", "us", "2.25 in"),
        (1200.0, "force", "metric", "1200 N"),
        (18_000.0, "force", "metric", "18 kN"),
        (4448.2216152605, "force", "us", "1000 lbf"),
        (math.radians(3), "angle", "us", "3 deg"),
        (2500.0, "torque", "metric", "2.5 N·m"),
        (210_000.0, "stress", "metric", "210000 MPa"),
        (1_234_567.0, "length", "metric", "1234567 mm"),
        (0.97, "number", "us", "0.97"),
        (1, "count", "metric", "1"),
        ("half a wrap", "text", "us", "half a wrap"),
        (-0.0, "length", "metric", "0 mm"),
    ],
)
def test_shown(value: float | str, kind: str, units: Units, text: str) -> None:
    assert show(value, kind, units) == text


@given(
    value=st.floats(min_value=-1e9, max_value=1e9, allow_subnormal=False),
    kind=st.sampled_from(sorted(KINDS)),
    units=st.sampled_from(["metric", "us"]),
)
def test_what_is_shown_reads_back(value: float, kind: str, units: Units) -> None:
    assert read_quantity(show(value, kind, units), kind) == pytest.approx(value, rel=6e-6, abs=1e-300)


@given(text=st.text(max_size=40))
def test_any_text_is_a_quantity_or_is_refused(text: str) -> None:
    try:
        value = read_quantity(text, "length")
    except Refused:
        return
    assert math.isfinite(value)


@pytest.mark.parametrize(
    ("said", "shown"),
    [
        ("25.4 mm", "25.4 mm (1 in)"),
        ("over 0 and up to 16 mm, what S500MC is for", "over 0 and up to 16 mm (0.629921 in), what S500MC is for"),
        ("less than 92.34 mm; at least -1e2 mm", "less than 92.34 mm (3.63543 in); at least -1e2 mm (-3.93701 in)"),
        ('one such as "58 mm"', 'one such as "58 mm"'),
        ("5 mm², 5 N/mm, 5 mm/s, 5 mm^2, B5 mm, 3 deg", "5 mm², 5 N/mm, 5 mm/s, 5 mm^2, B5 mm, 3 deg"),
    ],
)
def test_lengths_in_a_message_are_given_in_inches_too(said: str, shown: str) -> None:
    assert with_inches(said) == shown
