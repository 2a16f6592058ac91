"""What the controller is told, and the two procedures: numbers are those of the cycle and of the map of power loss."""

from __future__ import annotations

import json
import math
from itertools import pairwise

import pytest

from exporters.controller import BACK, controller_json, positions, power_loss, zones
from exporters.procedures import first_wind, procedures_html, unloading
from tests.exporters.examined import STARTERS, awkward, short, starter

ENCODER = (
    "[moving]\n",
    '[drive]\nstall_torque = "20 N·m"\nfree_speed = "1400 rpm"\nsupply_voltage = "24 V"\nreduction = 90\n'
    'encoder_counts = 1024\nencoder_on = "motor"\n\n[moving]\n',
)


@pytest.mark.parametrize("name", STARTERS)
def test_positions_are_those_of_the_cycle(name: str) -> None:
    e = starter(name)
    document = json.loads(controller_json(e))
    at = {row["name"]: row["angle_deg"] for row in document["positions"]}
    events = e.figures.events
    for key, value in (
        ("catch", events.catch),
        ("hold", events.hold),
        ("null", events.null),
        ("release", events.release),
    ):
        assert at[key] == pytest.approx(math.degrees(float(value)), abs=1e-3)
    assert at["zero"] == 0.0
    assert at["back of the stop"] < 0.0
    assert [p.angle for p in positions(e)] == sorted(p.angle for p in positions(e))
    assert all(row["counts"] is None for row in document["positions"])
    assert document["encoder"]["counts_needed"] > 100


def test_counts_of_an_encoder_on_the_motor() -> None:
    e = starter("impact-rig", ENCODER)
    document = json.loads(controller_json(e))
    assert document["encoder"]["counts_per_turn_of_disc"] == 1024 * 90
    for row in document["positions"]:
        assert row["counts"] == pytest.approx(row["angle_deg"] / 360.0 * 1024 * 90, abs=0.6)


@pytest.mark.parametrize("name", STARTERS)
def test_zones_cover_everything_without_a_gap(name: str) -> None:
    e = starter(name)
    found, known = zones(e), power_loss(e)
    assert known is not None
    for one, other in pairwise(found):
        assert one.end == pytest.approx(other.start, abs=1e-9)
    assert found[-1].end == pytest.approx(known.bands[-1].end)
    hold, first_end = float(e.figures.events.hold), float(e.figures.events.first_end)
    for zone in found:
        assert zone.allowed
        if zone.start >= first_end - 1e-9:
            assert BACK not in zone.allowed
            assert "fired" in zone.on_loss
        if zone.fate == "unwinds" and zone.end <= hold:
            assert BACK in zone.allowed
    assert any(zone.end == pytest.approx(hold) for zone in found)


@pytest.mark.parametrize("name", STARTERS)
def test_the_first_wind_stops_at_catch_and_hold(name: str) -> None:
    e = starter(name)
    rows = first_wind(e)
    angles = [float(row["angle"]) for row in rows]
    assert angles == sorted(angles)
    assert angles[0] == 0.0
    assert angles[-1] == pytest.approx(math.degrees(float(e.figures.events.hold)), abs=0.06)
    assert any("touches the flank" in row["look"] for row in rows)
    assert len(unloading(e)) == len(zones(e))


def test_the_page_escapes_and_says_what_falls_short() -> None:
    page = procedures_html(awkward())
    assert "<b>bold</b>" not in page
    assert "&lt;b&gt;bold" in page
    assert "DO NOT" not in page
    assert "Do not wind this machine" in procedures_html(short())
    assert procedures_html(starter("impact-rig")) == procedures_html(starter("impact-rig"))
