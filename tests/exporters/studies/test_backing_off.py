"""The study of backing off as it leaves: in check.json, on the page with its picture, in the summary."""

from __future__ import annotations

import io
import json
import math
from typing import Any

import pytest
from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.summary import print_summary
from loads.backing_off import BackingOff
from loads.examine import Examination
from tests.exporters.examined import starter

SLACK = ('slack = "0 mm"', 'slack = "12 mm"')


def row_of(e: Examination) -> dict[str, Any]:
    found: dict[str, Any] = json.loads(dump(check_document(e)))["studies"]["backing_off"]
    return found


def rated() -> Examination:
    return starter("soil-tamper", ("crank_radius", 'reverse = "rated"\ncrank_radius')) if not _says_reverse() else starter(
        "soil-tamper", ('reverse = "forbidden"', 'reverse = "rated"')
    )  # fmt: skip


def _says_reverse() -> bool:
    from tests.starters import text_of

    return 'reverse = "forbidden"' in text_of("soil-tamper")


def test_every_design_has_the_fixed_names_first() -> None:
    for name in ("impact-rig", "seed-thrower", "soil-tamper"):
        row = row_of(starter(name))
        assert list(row)[:3] == ["back_contact_deg", "reversed_pull_mm", "carrying_slack_mm"]
        assert -180.0 < row["back_contact_deg"] < -90.0
        assert row["reversed_pull_mm"] > row["forward_pull_mm"]
        assert row["carrying_slack_mm"] > 0.0
        assert row["reverse"] == "forbidden"
        assert row["fires_from_deg"] == max(row["reversed_null_deg"], row["reversed_release_deg"])


def test_the_curve_and_the_map_can_be_read_back() -> None:
    row = row_of(starter("impact-rig", SLACK))
    assert row["curve"][0] == {"crank_angle_deg": 0.0, "pull_mm": 0.0}
    assert max(at["pull_mm"] for at in row["curve"]) == pytest.approx(row["reversed_pull_mm"], abs=1e-3)
    assert row["curve"][-1]["crank_angle_deg"] == row["reversed_release_deg"]
    angles = [pose["crank_angle_deg"] for pose in row["poses"]]
    assert (min(angles), max(angles)) == (row["slack_from_deg"], row["slack_to_deg"])
    assert all(pose["link_from_deg"] <= pose["link_to_deg"] for pose in row["poses"])
    assert row_of(starter("impact-rig"))["poses"] == []


def test_the_page_has_a_section_with_the_machine_on_its_back() -> None:
    e = starter("impact-rig", SLACK)
    text = bill_html(e)
    study = e.studies["backing_off"]
    assert isinstance(study, BackingOff)
    assert '<h2 id="backing_off">Backing off</h2>' in text
    assert 'id="back-contact-title"' in text
    assert 'id="reversed-pull-title"' in text
    assert f"\N{MINUS SIGN}{abs(math.degrees(study.back_contact or 0.0)):.1f}°" in text
    assert "That is forbidden" in text
    assert "With slack" in text
    assert "With slack" not in bill_html(starter("impact-rig"))


def test_a_rated_design_says_so() -> None:
    e = rated()
    assert row_of(e)["reverse"] == "rated"
    assert "The design is rated for that" in bill_html(e)
    rows = [row for row in check_document(e)["checks"] if row["case"] == "reversed"]
    assert {"chain", "stop", "swing_link"} <= {row["part"] for row in rows}
    assert all(row["crank_angle_deg"] is None or row["crank_angle_deg"] <= 0.0 for row in rows)


def test_the_summary_has_a_line() -> None:
    out = io.StringIO()
    print_summary(starter("seed-thrower"), Console(file=out, width=200))
    text = " ".join(out.getvalue().split())
    assert "Backing off: the stop's back is met at \N{MINUS SIGN}" in text
    assert "forbidden" in text


def test_it_is_shown_in_inches_where_those_are_wanted() -> None:
    e = starter("seed-thrower", ('units = "metric"', 'units = "us"'))
    text = bill_html(e)
    section = text[text.index('id="backing_off"') : text.index("</section>", text.index('id="backing_off"'))]
    assert " in<" in section
    assert " mm" not in section
    assert any("in more than forwards" in caution for caution in e.cautions)
