"""The study of the release as it leaves: in check.json, on the page, in the summary, as a picture."""

from __future__ import annotations

import html
import io
import json
import re
from functools import lru_cache
from pathlib import Path
from tempfile import TemporaryDirectory
from xml.etree import ElementTree

import numpy as np
import pytest
from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.release import course_picture, governs, release_line, release_row, release_values
from exporters.summary import print_summary
from loads.examine import Examination, examine
from loads.records import RELEASE, SNATCH
from loads.release.study import ReleaseStudy
from tests.starters import NAMES, put_all, whole_text_of

FIXED = [
    "covered", "time_ms", "payload_speed_m_s", "payload_energy_J", "swing_tension_N", "snatch_N", "snatch_torque_Nm",
    "energy_error",
]  # fmt: skip
NO_MASS = {"moving__stopped_elsewhere": "true", "moving__mass": None, "moving__payload_mass": None}
CW = {
    "mechanism__rotation": '"cw"', "sheave__wrap": '"right"', "sheave__center": '["460 mm", "-30 mm"]',
    "sheave__exit_angle": '"90 deg"',
}  # fmt: skip


@lru_cache(maxsize=8)
def whole(name: str, *changes: tuple[str, str | None]) -> Examination:
    with TemporaryDirectory() as folder:
        path = Path(folder) / "design.toml"
        path.write_text(put_all(whole_text_of(name), dict(changes)), encoding="utf-8")
        return examine(path)


def study_of(e: Examination) -> ReleaseStudy:
    found = e.studies["release"]
    assert isinstance(found, ReleaseStudy)
    return found


def uncovered() -> Examination:
    return whole("impact-rig", *NO_MASS.items(), ("moving__payload_leaves_at", None))


@pytest.mark.parametrize("name", NAMES)
def test_names_that_are_fixed(name: str) -> None:
    e = whole(name)
    document = json.loads(dump(check_document(e)))
    row, s = document["studies"]["release"], study_of(e)
    assert list(row)[:8] == FIXED
    assert row["covered"] is True
    assert row["why_not"] is None
    assert row["snatch_N"] == pytest.approx(s.snatch, rel=1e-4)
    assert row["swing_tension_N"] == pytest.approx(s.swing_tension, rel=1e-4)
    assert row["snatch_torque_Nm"] * 1000.0 == pytest.approx(s.snatch_torque, rel=1e-4)
    assert 0.0 <= row["energy_error"] < 1e-3
    assert (row["payload_speed_m_s"] is None) == (name == "soil-tamper")
    if row["payload_speed_m_s"] is not None:
        mass = e.design.moving.payload_mass if e.design.moving is not None else 0.0
        assert row["payload_energy_J"] == pytest.approx(mass * row["payload_speed_m_s"] ** 2 / 2.0, rel=1e-3)
        assert row["efficiency"] == pytest.approx(row["payload_energy_J"] / row["stored_J"], rel=1e-3)
        assert row["payload_energy_J"] < row["stored_J"]
        assert row["time_ms"] > row["first_slack_ms"]
    cases = {r["case"] for r in document["loads"]}
    assert {RELEASE, SNATCH} <= cases


def test_where_it_is_not_covered_numbers_are_null() -> None:
    e = uncovered()
    row = json.loads(dump(check_document(e)))["studies"]["release"]
    assert list(row)[:8] == FIXED
    assert row["covered"] is False
    assert all(row[key] is None for key in FIXED[1:])
    assert row["why_not"] == "the moving mass is not given"
    assert row["stopped_elsewhere"] is True
    assert release_line(e, study_of(e)) == "Release: NOT COVERED, the moving mass is not given."
    values = release_values(e, study_of(e))
    assert (values["facts"], values["picture"], values["governs"]) == ([], "", [])
    page = bill_html(e)
    part = page[page.index('id="release"') :]
    assert "NOT COVERED: the moving mass is not given." in part[: part.index("</section>")]


def test_the_mirror_image_has_the_same_numbers() -> None:
    one, other = whole("impact-rig"), whole("impact-rig", *CW.items())
    a, b = (release_row(e, study_of(e)) for e in (one, other))
    assert a["covered"] is True
    for key, value in a.items():
        if isinstance(value, float) and key != "energy_error":
            assert b[key] == pytest.approx(value, rel=1e-3), key
    chosen = [(r.part, r.site, r.case) for r in one.loads if r.case in (RELEASE, SNATCH)]
    assert chosen == [(r.part, r.site, r.case) for r in other.loads if r.case in (RELEASE, SNATCH)]
    size = max(r.magnitude for r in one.loads)
    for r, q in zip(one.loads, other.loads, strict=True):
        assert q.magnitude == pytest.approx(r.magnitude, rel=1e-3, abs=1e-3 * size)


def test_the_summary_has_a_line() -> None:
    e = whole("impact-rig")
    s = study_of(e)
    text = release_line(e, s)
    assert "the payload leaves with" in text
    assert f"{s.snatch / float(e.figures.largest_tension):.2g} times its largest tension of winding" in text
    out = io.StringIO()
    print_summary(e, Console(file=out, width=80))
    assert " ".join(text.split()) in " ".join(out.getvalue().split())


def test_what_governs_each_part() -> None:
    e = whole("impact-rig")
    rows = governs(e)
    assert len({row["part"] for row in rows}) == len(rows)
    margins = []
    for row in rows:
        mine = [c for c in e.checks if c.part == row["part"] and c.crank_angle is not None and c.case != ""]
        margins.append(min(c.margin for c in mine))
        least = min(mine, key=lambda c: c.margin)
        assert row["phase"] == ("release" if least.case in (RELEASE, SNATCH) else "winding")
    assert margins == sorted(margins)
    assert {row["phase"] for row in rows} == {"release", "winding"}


def test_the_page_has_a_section_in_either_units() -> None:
    for changes in ((), (("design__units", '"us"'),)):
        e = whole("impact-rig", *changes)
        page = bill_html(e)
        part = page[page.index('id="release"') :]
        part = html.unescape(part[: part.index("</section>")])
        assert ("lbf" in part) == bool(changes)
        for name, value in release_values(e, study_of(e))["facts"]:
            assert name in part
            assert value in part
        assert not re.search(r"\b(None|nan|inf)\b", re.sub(r"<svg.*?</svg>", "", part, flags=re.S))


def test_the_picture_is_read_out_and_holds_the_peak() -> None:
    e = whole("impact-rig")
    course = study_of(e).course
    assert course is not None
    tree = ElementTree.fromstring(
        course_picture(e, course).replace("<svg ", '<svg xmlns="http://www.w3.org/2000/svg" ', 1)
    )
    space = "{http://www.w3.org/2000/svg}"
    assert tree.get("role") == "img"
    said = tree.findtext(f"{space}desc") or ""
    at = 1000.0 * float(course.time[np.argmax(course.forces["tension"])])
    assert f"{at:.1f} ms later" in said
    words = [" ".join(t.itertext()) for t in tree.iter(f"{space}text")]
    for mark in ("slack", "payload leaves", "link straight"):
        assert any(word.startswith(mark) for word in words)
