"""The tables of ropes, webbing and bearings, against rows that others print."""

from __future__ import annotations

from itertools import pairwise

import pytest

from loads.catalogue import bearings, rope_breaking_force, rope_ends, rope_mass, ropes, webbings

ROPES = {rope.designation: rope for rope in ropes()}
BEARINGS = {bearing.designation: bearing for bearing in bearings()}


@pytest.mark.parametrize(
    ("diameter", "kg_per_100_m", "kn_1770", "kn_1960"),
    # API Spec 9A (26th edition), table C.1, class 6x7, fibre core
    [
        (6, 12.4, 21.2, 23.4),
        (8, 22.1, 37.6, 41.6),
        (10, 34.5, 58.8, 65.1),
        (12, 49.7, 84.6, 93.7),
        (16, 88.3, 150, 167),
        (20, 138, 235, 260),
        (32, 353, 602, 666),
    ],
)
def test_rope_rows_that_api_9a_prints(diameter: int, kg_per_100_m: float, kn_1770: float, kn_1960: float) -> None:
    rope = ROPES[f"6x7-FC {diameter}"]
    assert rope.breaking_force_1770 / 1000 == pytest.approx(kn_1770, rel=0.003)
    assert rope.breaking_force_1960 / 1000 == pytest.approx(kn_1960, rel=0.003)
    assert rope.mass_per_metre * 100 == pytest.approx(kg_per_100_m, rel=0.005)


def test_ropes_are_whole_and_a_wire_rope_could_be_like_that() -> None:
    assert {"6x19-FC", "6x19-IWRC", "6x36-FC", "6x36-IWRC", "19x7"} <= {rope.construction for rope in ropes()}
    for rope in ropes():
        # metal in the rope: breaking force over grade, and mass over steel's density, tell of the same section
        section = rope.mass_per_metre / 7.85e-3
        assert 0.60 < rope.breaking_force_1770 / 1770 / section < 0.80
        assert rope.breaking_force_1960 / rope.breaking_force_1770 == pytest.approx(1960 / 1770)
        assert rope.source
        assert rope.confirmed or "memory" in rope.source
    for end in rope_ends():
        assert 0.7 <= end.efficiency <= 1.0
        assert end.confirmed or "memory" in end.source
    assert rope_breaking_force(0.356, 12.0, 1770.0) == pytest.approx(90_740, rel=1e-3)
    assert rope_mass(0.409, 12.0) == pytest.approx(0.589, rel=1e-3)


def test_webbing_breaks_at_seven_times_its_load() -> None:
    for row in webbings():
        assert row.breaking_force == pytest.approx(7 * 9.80665 * row.working_load)
        assert row.width == pytest.approx(row.working_load * 0.03)


@pytest.mark.parametrize(
    ("designation", "sizes", "c0"),
    [
        # NTN, deep groove ball bearings, as printed in its catalogue: another maker than the table's
        ("6000", (10, 26, 8), 1960),
        ("6200", (10, 30, 9), 2390),
        ("6300", (10, 35, 11), 3500),
        ("6001", (12, 28, 8), 2390),
    ],
)
def test_bearings_against_another_maker(designation: str, sizes: tuple[float, float, float], c0: float) -> None:
    row = BEARINGS[designation]
    assert (row.bore, row.outer_diameter, row.width) == sizes
    assert row.static_rating == pytest.approx(c0, rel=0.06)


def test_bearings_are_whole() -> None:
    assert len(BEARINGS) == len(bearings())
    for row in bearings():
        assert row.bore < row.outer_diameter
        assert 0.4 * row.dynamic_rating < row.static_rating < row.dynamic_rating
        if int(row.designation) % 100 >= 4:  # ISO 15: the last two digits are a fifth of the bore
            assert row.bore == 5 * (int(row.designation) % 100)
    for series in ("60", "62", "63"):
        listed = [b for b in bearings() if b.designation.startswith(series)]
        for less, more in pairwise(listed):
            assert less.bore < more.bore
            assert less.static_rating <= more.static_rating * 1.0001
