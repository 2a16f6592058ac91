"""The ``[fatigue]`` table: read, defaulted, refused with its key."""

from __future__ import annotations

from pathlib import Path

import pytest

from parts.design import Fatigue
from parts.problems import Problem
from tests.parts.designs import FULL, LEAST, read


def fatigue(folder: Path, text: str) -> Fatigue:
    reading = read(folder, f"{LEAST}[fatigue]\n{text}")
    assert reading.problems == ()
    assert reading.design is not None
    assert reading.design.fatigue is not None
    return reading.design.fatigue


def refused(folder: Path, text: str) -> Problem:
    (problem,) = read(folder, f"{LEAST}[fatigue]\n{text}").problems
    return problem


def test_a_design_without_it(tmp_path: Path) -> None:
    design = read(tmp_path, FULL).design
    assert design is not None
    assert design.fatigue is None
    assert not any(row.key.startswith("fatigue") for row in design.assumed)


def test_what_is_left_out_is_assumed_with_its_reason(tmp_path: Path) -> None:
    design = read(tmp_path, f"{LEAST}[fatigue]\nshots = 20000\n").design
    assert design is not None
    surfaces = {"plates": "hot-rolled", "holes": "machined", "pins": "ground"}
    assert design.fatigue == Fatigue(20000.0, 0.99, surfaces, 0.5, None)
    rows = [row for row in design.assumed if row.key.startswith("fatigue.")]
    assert [row.key for row in rows] == [
        "fatigue.reliability", "fatigue.surface.plates", "fatigue.surface.holes", "fatigue.surface.pins",
        "fatigue.fillet_radius",
    ]  # fmt: skip
    assert all(row.why for row in rows)


def test_one_surface_or_one_for_each(tmp_path: Path) -> None:
    one = fatigue(tmp_path, 'shots = 1\nsurface = "machined"\n')
    assert set(one.surfaces.values()) == {"machined"}
    each = fatigue(tmp_path, 'shots = 1\nsurface = { plates = "as-cut", pins = "machined" }\n')
    assert each.surfaces == {"plates": "as-cut", "holes": "machined", "pins": "machined"}


def test_quantities(tmp_path: Path) -> None:
    found = fatigue(tmp_path, 'shots = 1e5\nfillet_radius = "0.04 in"\nchain_dynamic_strength = "3.7 kN"\n')
    assert found.fillet_radius == pytest.approx(1.016)
    assert found.chain_dynamic_strength == pytest.approx(3700.0)


@pytest.mark.parametrize(
    ("text", "key", "advice"),
    [
        ("shots = 0", "fatigue.shots", "from 1"),
        ("shots = -5", "fatigue.shots", "from 1"),
        ("shots = nan", "fatigue.shots", "from 1"),
        ("shots = inf", "fatigue.shots", "from 1"),
        ('shots = "20000"', "fatigue.shots", "bare number"),
        ("shots = true", "fatigue.shots", "bare number"),
        ("reliability = 0.9", "fatigue.shots", "shots ="),
        ("shots = 1\nreliability = 0.4", "fatigue.reliability", "0.5 to 0.9999"),
        ("shots = 1\nreliability = 1", "fatigue.reliability", "0.5 to 0.9999"),
        ('shots = 1\nsurface = "machine"', "fatigue.surface", 'nearest is "machined"'),
        ('shots = 1\nsurface = "polished"', "fatigue.surface", '"ground" or "machined"'),
        ('shots = 1\nsurface = { pins = "grund" }', "fatigue.surface", 'nearest is "ground"'),
        ('shots = 1\nsurface = { bolts = "ground" }', "fatigue.surface", "plates, holes, pins"),
        ("shots = 1\nsurface = 3", "fatigue.surface", '"ground"'),
        ("shots = 1\nsurface = { pins = 3 }", "fatigue.surface", '"ground"'),
        ('shots = 1\nfillet_radius = "2 N"', "fatigue.fillet_radius", "a length"),
        ("shots = 1\nchain_dynamic_strength = 0", "fatigue.chain_dynamic_strength", "1 N"),
        ("shots = 1\nshocks = 2", "fatigue.shocks", "shots (the nearest"),
    ],
)
def test_refused_with_its_key(tmp_path: Path, text: str, key: str, advice: str) -> None:
    problem = refused(tmp_path, text)
    assert problem.key == key
    assert advice in f"{problem.text} {problem.accepted}"
    assert problem.line is not None


def test_not_a_table(tmp_path: Path) -> None:
    (problem,) = read(tmp_path, f"fatigue = 3\n{LEAST}").problems
    assert problem.key == "fatigue"
