"""check.json: the names of the contract in their order, plain numbers, the same text each time."""

import json
import math

import pytest

from exporters.check_json import check_document, dump, tidy
from loads.records import CASES
from parts.quantities import KINDS, read_quantity
from tests.exporters.examined import STARTERS, awkward, short, starter

KEYS = [
    "format", "design", "events", "cycle", "loads", "frame_forces", "checks", "assumed", "from_memory", "far_end", "chain",
    "adjustment", "studies", "cautions", "holds",
]  # fmt: skip
EVENTS = [
    "start_direction_deg", "catch_deg", "null_deg", "release_deg", "hold_deg", "first_peak_deg", "second_peak_deg",
    "middle_least_deg",
]  # fmt: skip
CYCLE = [
    "pull_at_hold_mm", "draw_at_hold_mm", "stored_energy_J", "first_peak_Nm", "second_peak_Nm", "middle_least_Nm",
    "mean_torque_Nm", "hold_torque_Nm", "largest_tension_N", "largest_crank_pin_N", "largest_stop_N",
    "largest_link_bending_Nm",
]  # fmt: skip
LOAD = [
    "part", "site", "case", "crank_angle_deg", "frame", "fx_N", "fy_N", "fz_N", "mx_Nm", "my_Nm", "mz_Nm", "magnitude_N",
]  # fmt: skip
CHECK = [
    "part", "site", "check", "case", "crank_angle_deg", "demand", "capacity", "unit", "safety_factor", "target", "holds",
    "method", "source", "note",
]  # fmt: skip


@pytest.mark.parametrize("name", STARTERS)
def test_keys_are_those_of_the_contract_in_order(name: str) -> None:
    document = check_document(starter(name))
    assert list(document) == KEYS
    assert list(document["design"]) == ["title", "number", "revision", "digest"]
    assert list(document["events"]) == EVENTS
    assert list(document["cycle"]) == CYCLE
    assert all(list(row) == LOAD for row in document["loads"] + document["frame_forces"])
    assert all(list(row) == CHECK for row in document["checks"])
    assert all(list(row) == ["key", "value", "why"] for row in document["assumed"])
    assert document["format"] == 1
    assert {"power_loss", *(["fatigue"] if name == "soil-tamper" else [])} <= set(document["studies"])


def test_frame_forces_stand_apart_from_the_loads() -> None:
    document = check_document(starter("impact-rig"))
    assert {row["part"] for row in document["frame_forces"]} == {"frame"}
    assert "frame" not in {row["part"] for row in document["loads"]}
    assert {row["frame"] for row in document["frame_forces"]} == {"machine"}
    sites = {(row["part"], row["site"]) for row in document["loads"]}
    assert len(document["loads"]) == len(sites) * len(CASES)


@pytest.mark.parametrize("name", STARTERS)
def test_numbers_are_the_examination_s(name: str) -> None:
    e = starter(name)
    document = check_document(e)
    assert document["events"]["catch_deg"] == pytest.approx(math.degrees(float(e.figures.events.catch)), abs=1e-4)
    assert document["cycle"]["first_peak_Nm"] == pytest.approx(float(e.figures.first_peak) / 1000.0, rel=1e-6)
    for row, load in zip(document["loads"], (r for r in e.loads if r.part != "frame"), strict=True):
        found = [row[f"f{axis}_N"] for axis in "xyz"]
        assert found == pytest.approx(load.force, rel=1e-6, abs=1e-6)
        moments = [1000.0 * row[f"m{axis}_Nm"] for axis in "xyz"]
        assert moments == pytest.approx(load.moment, rel=1e-6, abs=1e-3)
        assert row["magnitude_N"] == pytest.approx(math.hypot(*found), rel=1e-5, abs=1e-5)
    for row, check in zip(document["checks"], e.checks, strict=True):
        assert row["holds"] is check.holds
        assert row["unit"] != "N·mm"
        if row["safety_factor"] is not None:
            assert row["safety_factor"] == pytest.approx(row["capacity"] / row["demand"], rel=1e-5)
        else:
            assert row["demand"] == 0.0
            assert row["holds"]
    assert document["holds"] is e.holds


def test_a_check_that_falls_short_shows() -> None:
    document = check_document(short())
    assert document["holds"] is False
    assert [row["check"] for row in document["checks"] if not row["holds"]] != []


@pytest.mark.parametrize("us", [False, True])
def test_assumed_values_can_be_pasted_into_the_design(us: bool) -> None:
    e = awkward() if us else starter("impact-rig")
    lengths = 0
    for row, given in zip(check_document(e)["assumed"], e.assumed, strict=True):
        if given.quantity in KINDS:
            lengths += given.quantity == "length"
            assert row["value"].endswith(KINDS[given.quantity].us if us else KINDS[given.quantity].metric)
            assert read_quantity(row["value"], given.quantity) == pytest.approx(given.value, rel=1e-5)
        elif isinstance(given.value, str):
            assert row["value"] == given.value
        else:
            assert isinstance(row["value"], (int, float))
            assert row["value"] == pytest.approx(given.value)
    assert lengths > 0


def test_the_text_is_json_without_special_numbers_and_comes_out_the_same() -> None:
    e = awkward()
    text = dump(check_document(e))
    assert text == dump(check_document(e))
    assert text.endswith("}\n")
    assert text.isascii()
    assert "-0.0," not in text
    assert "-0.0}" not in text

    def refuse(name: str) -> float:
        raise AssertionError(name)

    assert json.loads(text, parse_constant=refuse) == check_document(e)


def test_tidy() -> None:
    assert tidy(float("nan")) is None
    assert tidy(float("-inf")) is None
    assert math.copysign(1.0, tidy(-1e-9) or 0.0) == 1.0
    assert tidy(-4e-7) == 0.0
    assert tidy(351.04123456) == 351.0412
    assert tidy(123456789.0) == 123456800.0
    assert tidy(0.00012345678, decimals=15) == 0.0001234568
