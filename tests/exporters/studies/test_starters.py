"""The starters as they are written out: they hold, every study runs, and the bill says what governs each part."""

from __future__ import annotations

import json

import pytest

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.registry import study_lines
from exporters.studies.release import governs
from loads.examine import Examination, examine
from tests.starters import NAMES, whole_text_of

STUDIES = {"release", "power_loss", "backing_off", "trigger", "drive", "enclosure"}


@pytest.fixture(scope="module", params=NAMES)
def starter(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> Examination:
    file = tmp_path_factory.mktemp("starter") / "design.toml"
    file.write_text(whole_text_of(request.param), encoding="utf-8")
    return examine(file)


def test_it_holds_with_every_study(starter: Examination) -> None:
    assert starter.holds, [(c.part, c.site, c.check, c.safety_factor) for c in starter.falls_short]
    assert set(starter.studies) >= STUDIES


def test_the_document_has_the_fixed_names(starter: Examination) -> None:
    studies = json.loads(dump(check_document(starter)))["studies"]
    for name, keys in {
        "power_loss": ("bands", "least_seat_angle_deg", "self_firing_deg"),
        "backing_off": ("back_contact_deg", "reversed_pull_mm", "carrying_slack_mm"),
        "release": (
            "covered", "time_ms", "payload_speed_m_s", "payload_energy_J", "swing_tension_N", "snatch_N",
            "snatch_torque_Nm", "energy_error",
        ),
        "trigger": ("hold_margin_mean_deg", "hold_margin_std_deg", "firing_chance", "margin_for_chance_deg", "chance"),
        "drive": ("wind_time_s", "peak_motor_torque_Nm", "energy_a_shot_J", "starts_anywhere", "unloads_backwards"),
    }.items():  # fmt: skip
        assert set(keys) <= set(studies[name]), name
    assert {row["sweep"] for row in studies["enclosure"]} == {"winding", "release", "backing off"}
    for row in studies["enclosure"]:
        assert {"sweep", "clearance_mm", "part", "crank_angle_deg", "x_mm", "y_mm"} <= set(row)
    assert studies["release"]["covered"] is True
    assert studies["release"]["energy_error"] < 1e-3
    assert studies["drive"]["starts_anywhere"] is True


def test_the_bill_says_what_governs_each_part(starter: Examination) -> None:
    rows = governs(starter)
    assert {row["part"] for row in rows} >= {"crank_disc", "swing_link", "crank_pin", "chain_pin", "chain_end", "stop"}
    assert {row["phase"] for row in rows} == {"winding", "release"}
    page = bill_html(starter)
    for row in rows:
        assert f'<tr><th scope="row">{row["part"]}</th><td>{row["phase"]}</td>' in page
    assert len(study_lines(starter)) >= 4


def test_release_and_snatch_are_cases_of_the_loads(starter: Examination) -> None:
    cases = {row.case for row in starter.loads}
    assert {"release", "snatch"} <= cases
    assert sum(row.case == "snatch" for row in starter.loads) == len(starter.sites)
