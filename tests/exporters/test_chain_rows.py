"""The chain's facts and its adjustment table where they leave, and the list of what is from memory."""

from __future__ import annotations

import pytest

from exporters.bill import bill_html
from exporters.chain_rows import adjustment_line, adjustment_rows, chain_row, chain_values
from exporters.check_json import Row
from exporters.from_memory import from_memory
from loads.examine import Examination
from tests.exporters.examined import STARTERS, awkward, starter

RUN = ("[chain]", '[chain]\nrun_to_spring = "300 mm"')
ROW = [
    "slack_mm", "by", "pitches", "draw_at_hold_mm", "stored_energy_J", "first_peak_Nm", "second_peak_Nm",
    "middle_least_Nm", "hold_torque_Nm", "hold_margin_deg", "largest_tension_N",
]  # fmt: skip


def row_of(e: Examination) -> Row:
    row = chain_row(e)
    assert row is not None
    return row


@pytest.mark.parametrize("name", STARTERS)
def test_the_table_s_own_row_is_the_cycle_of_the_document(name: str) -> None:
    e = starter(name)
    rows = adjustment_rows(e)
    assert all(list(row) == ROW for row in rows)
    own = next(row for row in rows if row["by"] == "as designed")
    assert own["draw_at_hold_mm"] == pytest.approx(float(e.figures.draw_at_hold), rel=1e-6)
    assert own["stored_energy_J"] == pytest.approx(float(e.figures.stored_energy) / 1000.0, rel=1e-6)
    assert own["hold_torque_Nm"] == pytest.approx(float(e.figures.hold_torque) / 1000.0, rel=1e-6)
    page = bill_html(e)
    assert "Adjusting the chain" in page
    for row in chain_values(e)["rows"]:
        assert f'>{row["draw"]}</td><td class="n">{row["energy"]}</td>' in page


def test_the_length_is_said_as_far_as_it_is_known() -> None:
    unknown = row_of(starter("impact-rig"))
    assert unknown["taut_length_mm"] is None
    assert unknown["whole_pitches"] is None
    assert "depends on chain.run_to_spring" in unknown["length"]
    known = row_of(starter("impact-rig", RUN))
    assert known["taut_length_mm"] == pytest.approx(known["straight_mm"] + known["on_sheave_mm"] + 300.0)
    over = known["whole_pitches"] * known["pitch_mm"] - known["taut_length_mm"]
    assert known["slack_of_whole_pitches_mm"] == pytest.approx(over, abs=1e-3)
    assert '<th scope="col" class="n">Pitches</th>' in bill_html(starter("impact-rig", RUN))
    assert known["speed_limit_m_min"] == 30.0
    assert unknown["ends"] is None
    word = {0: "even", 1: "odd"}
    assert f"{known['whole_pitches']} is {word[known['whole_pitches'] % 2]}" in known["ends"]
    further = f"{300.0 + known['pitch_mm']:g}"
    longer = row_of(starter("impact-rig", ("[chain]", f'[chain]\nrun_to_spring = "{further} mm"')))
    assert longer["whole_pitches"] == known["whole_pitches"] + 1
    assert f"is {word[longer['whole_pitches'] % 2]}" in longer["ends"]


def test_the_summary_s_line_says_what_wear_does() -> None:
    line = adjustment_line(starter("impact-rig")) or ""
    assert line.startswith("Chain: worn by 3 %")
    assert "bill" in line
    assert " in" in (adjustment_line(awkward()) or "")


def test_what_is_from_memory_is_named_part_by_part() -> None:
    block, single = from_memory(starter("impact-rig")), from_memory(starter("seed-thrower"))
    for start in ("chain LH2044", "material S690QL", "cap screw M", "dowel", "stock sizes"):
        assert any(row.startswith(start) for row in block), start
    assert any(row.startswith("retaining ring") for row in single)
    assert not any(row.startswith("dowel") for row in single)
    assert not any("42CrMo4" in row for row in block)  # read in a maker's card
    assert len(set(block)) == len(block)
    page = bill_html(starter("impact-rig"))
    assert "confirm with the maker" in page.lower() or "Confirm them with the maker" in page
