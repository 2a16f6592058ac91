"""The study of fatigue as it leaves: in check.json, on the page, in the summary; nothing of it without its table."""

from __future__ import annotations

import io
import json

import pytest
from rich.console import Console

from exporters.bill import bill_html, bill_json
from exporters.check_json import check_document, dump
from exporters.studies import fatigue
from exporters.studies.fatigue import FOR_EVER, life_text, shots_text
from exporters.summary import print_summary
from loads.examine import Examination
from tests.exporters.examined import starter
from tests.starters import fatigue_of


def tired(*lines: str, shots: str = "20000") -> Examination:
    return starter(
        "impact-rig", ("[targets]\n", "\n".join(["[fatigue]", f"shots = {shots}", *lines, "", "[targets]\n"]))
    )


def test_rows_have_the_fixed_names_and_more() -> None:
    e = tired()
    document = json.loads(dump(check_document(e)))
    rows = document["studies"]["fatigue"]
    assert len(rows) == len({(row["part"], row["site"]) for row in rows})
    for row in rows:
        assert list(row)[:4] == ["part", "site", "life_shots", "factor"]
        assert row["shots"] == 20000
        # a life, or for ever, or no rating
        assert (row["life_shots"] is not None) + row["endless"] + (row["factor"] is None) == 1
    checks = {(c["part"], c["site"]): c for c in document["checks"] if c["check"] == "fatigue"}
    assert set(checks) == {(row["part"], row["site"]) for row in rows}
    for row in rows:
        check = checks[row["part"], row["site"]]
        assert check["target"] == 1
        assert check["safety_factor"] == (None if row["factor"] is None else pytest.approx(row["factor"], rel=1e-5))


def test_a_largest_cycle_can_be_followed_with_a_pocket_calculator() -> None:
    """One counted cycle a shot: 1/n = σ_a/S_f + σ_m/S_ut, S_f on the line from f S_ut at 10³ to S_e at 10⁶."""
    rows = check_document(tired(shots="50000"))["studies"]["fatigue"]
    single = [r for r in rows if r["factor"] and r["cycles_a_shot"] == 1.0 and r["part"] == "chain_end"]
    assert single
    for row in single:
        s_ut, s_e = row["ultimate_MPa"], row["endurance_limit_MPa"]
        f = min(0.9, 1.06 - 4.1e-4 * s_ut + 1.5e-7 * s_ut**2)
        slope = (f * s_ut / s_e) ** (1.0 / 3.0)  # a decade
        s_f = f * s_ut / slope**1.69897  # log10(50000/1000)
        assert 1.0 / row["factor"] == pytest.approx(row["amplitude_MPa"] / s_f + row["mean_MPa"] / s_ut, rel=2e-3)


def test_the_page_has_a_section() -> None:
    text = bill_html(tired())
    assert '<h2 id="fatigue">Fatigue</h2>' in text
    assert "after the release is not in it" in text
    assert "A suggestion: look for cracks after" in text
    assert "no rating" in text
    assert 'id="fatigue"' not in bill_html(starter("impact-rig"))
    assert '"fatigue"' in bill_json(tired())


def test_the_page_in_us_units() -> None:
    e = starter(
        "impact-rig", ('units = "metric"', 'units = "us"'), ("[targets]\n", "[fatigue]\nshots = 20000\n\n[targets]\n")
    )
    values = fatigue.fatigue_values(e, fatigue_of(e))
    assert values is not None
    assert values["stress"] == "ksi"
    assert "Amplitude ksi" in bill_html(e)


def test_the_summary_has_a_line() -> None:
    e = tired()
    out = io.StringIO()
    print_summary(e, Console(file=out, width=80))
    text = " ".join(out.getvalue().replace("\N{NO-BREAK SPACE}", " ").split())
    assert "Fatigue, 20 000 shots: least factor" in text
    assert "without the release's snatch" in text
    assert "The chain has no fatigue rating." in text
    assert "A suggestion: look for cracks after" in text
    assert all(len(line) <= 80 for line in out.getvalue().splitlines())
    assert "fatigue" not in starter("impact-rig").studies


def test_a_rated_chain_is_not_said_to_have_no_rating() -> None:
    e = tired('chain_dynamic_strength = "60 kN"')
    assert "no fatigue rating" not in fatigue.fatigue_line(e, fatigue_of(e))
    row = next(r for r in check_document(e)["studies"]["fatigue"] if r["part"] == "chain")
    assert row["factor"] > 0
    assert row["amplitude_MPa"] is None


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.2, "under 1"),
        (1.0, "1"),
        (9.9, "10"),
        (37.0, "37"),
        (1349.9, "1 300"),
        (20000.0, "20 000"),
        (2e9, "over 1 000 000 000"),
    ],
)
def test_shots_as_people_read_them(value: float, text: str) -> None:
    assert shots_text(value).replace("\N{NO-BREAK SPACE}", " ") == text


def test_the_stated_shots_are_not_rounded() -> None:
    e = tired(shots="12345")
    text = fatigue.fatigue_line(e, fatigue_of(e))
    assert "12 345 shots" in text.replace("\N{NO-BREAK SPACE}", " ")


def test_what_lives_for_ever_says_so() -> None:
    e = starter("soil-tamper")
    assert all(life_text(row) == FOR_EVER for row in fatigue_of(e).rows if row.factor is not None)
    assert fatigue_of(e).inspect_after is None
    assert "suggestion" not in fatigue.fatigue_line(e, fatigue_of(e))
