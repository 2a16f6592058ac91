"""cycle.csv: columns of the contract, each angle once, each event in it, forces that add up."""

import csv
import io
import math

import numpy as np
import pytest

from exporters.cycle_csv import cycle_csv
from loads.examine import Examination
from parts.design import Floats
from tests.exporters.examined import STARTERS, starter

HEADER = (
    "crank_angle_deg,stage,pull_mm,draw_mm,chain_tension_N,crank_torque_Nm,link_angle_deg,crank_pin_force_N,"
    "crank_pin_fx_N,crank_pin_fy_N,stop_force_N,link_axial_N,link_bending_Nm,shaft_fx_N,shaft_fy_N,sheave_force_N"
)


def columns(e: Examination) -> tuple[list[str], dict[str, Floats]]:
    rows = list(csv.DictReader(io.StringIO(cycle_csv(e))))
    names = [name for name in rows[0] if name != "stage"]
    return [row["stage"] for row in rows], {name: np.array([float(row[name]) for row in rows]) for name in names}


def test_header() -> None:
    text = cycle_csv(starter("impact-rig"))
    assert text.splitlines()[0] == HEADER
    assert text.endswith("\n")
    assert "\r" not in text
    assert "nan" not in text
    assert "e-" not in text


@pytest.mark.parametrize("name", STARTERS)
def test_angles_are_sorted_single_and_hold_every_event(name: str) -> None:
    e = starter(name)
    angle = columns(e)[1]["crank_angle_deg"]
    at = e.figures.events
    assert np.all(np.diff(angle) > 0.0)
    assert angle[0] == 0.0
    assert angle[-1] == pytest.approx(math.degrees(float(at.release)), abs=1e-5)
    wanted = [at.catch, at.hold, at.null, at.release]
    wanted += [e.figures.first_peak_at, e.figures.second_peak_at, e.figures.middle_least_at]
    for event in (math.degrees(float(v)) for v in wanted):
        assert np.min(np.abs(angle - event)) < 1e-5
    halves = np.arange(0.0, angle[-1], 0.5)
    assert np.max(np.min(np.abs(angle[:, None] - halves), axis=0)) < 1e-5


@pytest.mark.parametrize("name", STARTERS)
def test_the_stage_is_free_up_to_and_with_the_catch(name: str) -> None:
    e = starter(name)
    stage, column = columns(e)
    catch = math.degrees(float(e.figures.events.catch))
    for word, angle in zip(stage, column["crank_angle_deg"], strict=True):
        assert word == ("free" if angle <= catch + 1e-6 else "seated")


@pytest.mark.parametrize("name", STARTERS)
def test_components_and_balance(name: str) -> None:
    _, c = columns(starter(name))
    pin = np.hypot(c["crank_pin_fx_N"], c["crank_pin_fy_N"])
    assert pin == pytest.approx(c["crank_pin_force_N"], rel=1e-5, abs=1e-3)
    assert np.hypot(c["shaft_fx_N"], c["shaft_fy_N"]) == pytest.approx(c["chain_tension_N"], rel=1e-5, abs=1e-3)
    # chain, pin and stop hold the link at rest: what chain and pin leave over is the stop's
    left_x, left_y = -c["shaft_fx_N"] + c["crank_pin_fx_N"], -c["shaft_fy_N"] + c["crank_pin_fy_N"]
    assert np.hypot(left_x, left_y) == pytest.approx(np.abs(c["stop_force_N"]), rel=1e-4, abs=0.05)


def test_forces_are_in_the_machine_frame() -> None:
    """At the start the chain runs along the start direction, so the shaft holds the disc back in it."""
    e = starter("soil-tamper")
    _, c = columns(e)
    direction = math.atan2(-c["shaft_fy_N"][0], -c["shaft_fx_N"][0])
    assert direction == pytest.approx(float(e.machine.start_direction), abs=1e-6)
