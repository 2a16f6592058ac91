"""The drive study as it leaves: check.json's fixed names, the page, the summary's line."""

from __future__ import annotations

import io
import json

from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.drive import drive_line, drive_values
from exporters.summary import print_summary
from loads.drive import DriveStudy
from loads.examine import Examination
from tests.exporters.examined import starter

FIXED = ["wind_time_s", "peak_motor_torque_Nm", "energy_a_shot_J", "starts_anywhere", "unloads_backwards"]
MOTOR = ('stall_torque = "3 N·m"', 'free_speed = "3000 rpm"', "supply_voltage = 24", "efficiency = 0.8")


def driven(*lines: str, units: str = "metric") -> Examination:
    table = "\n".join(["[drive]", *lines, "", "[targets]\n"])
    return starter("impact-rig", ("[targets]\n", table), ('units = "metric"', f'units = "{units}"'))


def study(e: Examination) -> DriveStudy:
    found = e.studies["drive"]
    assert isinstance(found, DriveStudy)
    return found


def test_fixed_names_come_first_with_a_motor() -> None:
    row = json.loads(dump(check_document(driven(*MOTOR, "reduction = 600"))))["studies"]["drive"]
    assert list(row)[:5] == FIXED
    assert row["wind_time_s"] > 0.0
    assert row["energy_a_shot_J"] > row["motor_shaft_energy_J"] > row["at_disc"]["energy_J"]
    assert (row["starts_anywhere"], row["unloads_backwards"]) == (True, True)
    assert row["demands"] is None


def test_nulls_without_one() -> None:
    row = json.loads(dump(check_document(starter("impact-rig"))))["studies"]["drive"]
    assert list(row)[:5] == FIXED
    assert [row[key] for key in FIXED] == [None] * 5
    assert row["demands"]["winding_time_s"] == 4.0
    assert row["at_disc"]["peak_torque_Nm"] > 0.0


def test_a_stalling_motor() -> None:
    e = driven(*MOTOR, "reduction = 100")
    row = json.loads(dump(check_document(e)))["studies"]["drive"]
    assert row["wind_time_s"] is None
    assert row["energy_a_shot_J"] is None
    assert row["starts_anywhere"] is False
    assert "the motor stalls" in drive_line(e, study(e))
    assert "it stalls" in bill_html(e)


def test_the_page() -> None:
    text = bill_html(driven(*MOTOR, "reduction = 600", "encoder_counts = 2000"))
    assert '<h2 id="drive">The drive</h2>' in text
    assert '<h2 id="motor">' in text  # its checks
    assert "The motor given" in text
    assert "What to look for in a motor" not in text
    assert text.count('id="drive"') == 1
    without = bill_html(starter("impact-rig"))
    assert "What to look for in a motor" in without
    assert "in a time that is assumed" in without
    assert "The motor given" not in without


def test_us_units() -> None:
    e = driven(*MOTOR, "reduction = 600", units="us")
    facts = dict(drive_values(e, study(e))["disc"])
    assert "lbf·ft" in facts["Mean torque, winding"]
    assert "ft·lbf" in facts["Work a shot"]


def test_the_summary_has_a_line() -> None:
    for e, says in (
        (driven(*MOTOR, "reduction = 600"), "Drive: wound in"),
        (starter("impact-rig"), "Drive: to wind in 4"),
    ):
        out = io.StringIO()
        print_summary(e, Console(file=out, width=80))
        assert says in " ".join(out.getvalue().split())
        assert all(len(line) <= 80 for line in out.getvalue().splitlines())
