"""The bill of loads: everything in it, everything escaped, one page that needs nothing beside it."""

import csv
import io
import json
import math
import re
from dataclasses import replace
from html.parser import HTMLParser

import numpy as np
import pytest

from exporters.bill import COLUMNS, bill_csv, bill_html, bill_json
from exporters.bill_page import section_keys
from exporters.check_json import check_document
from exporters.curves import nice_ticks
from exporters.parts_list import items, parts_list_csv
from exporters.parts_list import plain as cell
from exporters.shown import Shown, factor_text, figures
from exporters.site_places import force_in_part, made, place, worst_rows
from loads.examine import Examination
from parts.outline import Plate
from parts.shape import is_inside
from tests.exporters.examined import AWKWARD, STARTERS, awkward, short, starter

VOID = {"meta", "br", "hr", "link", "img", "input"}


class Page(HTMLParser):
    """Texts of a page, its table rows, and tags left open."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.open: list[str] = []
        self.rows: list[list[str]] = []
        self.ids: list[str] = []
        self.tags: set[str] = set()
        self.texts: list[str] = []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.add(tag)
        self.ids += [value for name, value in attrs if name == "id" and value]
        if tag not in VOID:
            self.open.append(tag)
        if tag == "tr":
            self.rows.append([])
        if tag in ("th", "td"):
            self.rows[-1].append("")

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.add(tag)

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if "style" in self.open:
            return
        self.texts.append(data)
        if "td" in self.open or ("th" in self.open and self.rows):
            self.rows[-1][-1] += data


@pytest.mark.parametrize("name", STARTERS)
def test_the_page_shows_every_load_and_every_check(name: str) -> None:
    e = starter(name)
    shown = Shown(e.design.identity.units)
    rows = [[text.strip() for text in row] for row in Page(bill_html(e)).rows]
    for load in e.loads:
        numbers = [shown.number(v, "force") for v in load.force] + [shown.number(v, "torque") for v in load.moment]
        found = [r for r in rows if r[0] == load.site and r[1].startswith(load.case) and r[4:10] == numbers]
        assert found, load
    for check in e.checks:
        demand, capacity, unit = shown.check(check)
        start = [demand, capacity, unit, factor_text(check), f"{check.target:g}"]
        found = [r for r in rows if r[0].startswith(check.check + check.site) and r[1:6] == start]
        assert found, check
        assert any(check.method in r[-1] and check.source in r[-1] for r in found)
        assert any(("FALLS SHORT" in r) is not check.holds for r in found)


def test_the_page_is_sound_and_needs_nothing_beside_it() -> None:
    for e in (awkward(), short(), *map(starter, STARTERS)):
        text = bill_html(e)
        page = Page(text)
        assert page.open == []
        assert len(page.ids) == len(set(page.ids))
        assert page.tags.isdisjoint({"script", "img", "link", "iframe"})
        assert "http" not in text
        assert "url(" not in text
        assert "None" not in "".join(page.texts)
        assert not re.search(r"\bnan\b|\binf\b", text)
        assert text.lstrip().startswith("<!DOCTYPE html>")
        for link in re.findall(r'href="#([^"]*)"', text):
            assert link in page.ids


def test_pictures_are_described() -> None:
    text = bill_html(starter("impact-rig"))
    for picture in re.findall(r"<svg[^>]*>", text):
        if "aria-hidden" in picture:
            continue
        names = re.search(r'aria-labelledby="([^"]*)"', picture)
        assert names
        for name in names[1].split():
            assert re.search(rf'<(title|desc) id="{name}">[^<]+<', text)


def test_text_from_the_design_is_escaped() -> None:
    text = bill_html(awkward())
    assert "<b>" not in text
    assert "A &lt;b&gt;bold&lt;/b&gt; rig &amp; " in text
    assert AWKWARD in "".join(Page(text).texts)
    assert json.loads(bill_json(awkward()))["design"]["title"] == AWKWARD


def test_what_falls_short_is_said_in_words() -> None:
    e = short()
    texts = "".join(Page(bill_html(e)).texts)
    assert "FALLS SHORT" in texts
    assert "HOLDS" not in texts
    assert json.loads(bill_json(e))["verdict"].startswith("FALLS SHORT: ")
    assert "chain, strand: tension" in bill_csv(e).splitlines()[1]
    assert "FALLS SHORT" in bill_csv(e)
    assert "FALLS SHORT: strand tension" in parts_list_csv(e)
    assert "FALLS SHORT" not in "".join(Page(bill_html(_holding(e))).texts)


def _holding(e: Examination) -> Examination:
    """The same examination with only the checks that hold."""
    return replace(e, checks=tuple(row for row in e.checks if row.holds))


def test_cautions_come_before_the_verdict_and_none_is_left_out() -> None:
    e = starter("seed-thrower")
    assert json.loads(bill_json(e))["cautions"] == list(e.cautions)
    rows = csv.DictReader(io.StringIO(bill_csv(e)))
    assert [row["note"] for row in rows if row["row"] == "caution"] == list(e.cautions)
    texts = "".join(Page(bill_html(e)).texts)
    for caution in e.cautions:
        assert texts.index(caution) < texts.index("Verdict")


def test_units_follow_the_design() -> None:
    metric, us = bill_html(starter("impact-rig")), bill_html(awkward())
    assert "fx N<" in metric
    assert "fx lbf<" in us
    assert "mx lbf·ft<" in us
    assert "fx N<" not in us
    assert "energy stored at the hold" in us
    assert "ft·lbf" in us
    # JSON and CSV stay SI; couples may differ, for the plates are proportioned from inch stock
    for one, other in zip(*(check_document(e)["loads"] for e in (awkward(), starter("impact-rig"))), strict=True):
        if one["site"] != "hub_face":
            assert one["magnitude_N"] == pytest.approx(other["magnitude_N"], rel=1e-6)


def test_the_twin_s_note_is_there_for_twins_only() -> None:
    note = "In front of the chain mx and my"
    assert note in bill_html(starter("impact-rig"))
    assert note not in bill_html(starter("seed-thrower"))


def test_csv_and_json_hold_the_rows_of_check_json() -> None:
    e = starter("seed-thrower")
    document = check_document(e)
    assert json.loads(bill_json(e))["loads"] == document["loads"]
    rows = list(csv.DictReader(io.StringIO(bill_csv(e))))
    assert tuple(rows[0]) == COLUMNS
    assert rows[0]["row"] == "verdict"
    for kind, name in (("load", "loads"), ("frame_force", "frame_forces"), ("check", "checks")):
        found = [row for row in rows if row["row"] == kind]
        assert len(found) == len(document[name])
        for line, record in zip(found, document[name], strict=True):
            for key, value in record.items():
                text = "" if value is None else str(value).lower() if isinstance(value, bool) else str(value)
                assert line[key] == text


def test_the_same_text_each_time() -> None:
    e = starter("soil-tamper")
    assert (bill_html(e), bill_csv(e), bill_json(e)) == (bill_html(e), bill_csv(e), bill_json(e))


@pytest.mark.parametrize("name", STARTERS)
def test_sites_lie_on_their_parts(name: str) -> None:
    e = starter(name)
    for key in section_keys(e):
        part = made(e, key)
        for row in worst_rows(e, key):
            at = place(e, key, row.site)
            if part is None or not isinstance(part.body, Plate):
                continue
            holes = {hole.name: hole.center for hole in part.body.holes}
            if row.site in holes:
                assert at == pytest.approx(holes[row.site], abs=1e-9)
            else:  # on the edge or inside: half a hair towards the middle it is inside
                assert is_inside(part.body.outline, (at[0], at[1] * (1.0 - 1e-6)))


@pytest.mark.parametrize("name", STARTERS)
def test_pushes_point_into_their_parts(name: str) -> None:
    """The stop pushes the link at its flank, the link the stop at its contact; the chain pulls its end outwards."""
    e = starter(name)
    for key, site in (("swing_link", "stop_flank"), ("stop", "contact")):
        part = made(e, key)
        assert part is not None
        row = next(r for r in worst_rows(e, key) if r.site == site)
        at, force = place(e, key, site), force_in_part(e, part, row)
        assert np.dot(at if key == "stop" else (0.0, at[1]), force) < 0.0
    part = made(e, "chain_end")
    assert part is not None
    for row in worst_rows(e, "chain_end"):
        fx, fy = force_in_part(e, part, row)
        assert fx == pytest.approx(row.magnitude if row.site == "chain_hole" else -row.magnitude)
        assert fy == pytest.approx(0.0, abs=1e-6 * row.magnitude)


def test_parts_list() -> None:
    e = starter("impact-rig")
    rows = list(csv.DictReader(io.StringIO(parts_list_csv(e, {"chain_pin": 1.23456}))))
    assert list(rows[0])[:9] == [
        "part", "number", "revision", "quantity", "material", "stock", "mass_kg", "process", "made_or_bought",
    ]  # fmt: skip
    numbers = {row["number"] for row in rows if row["made_or_bought"] == "made"}
    assert numbers == {f"GIR-200-{part.name}" for part in e.parts}
    assert next(row["mass_kg"] for row in rows if row["number"] == "GIR-200-chain_pin") == "1.235"
    assert all(row["mass_kg"] == "" for row in rows if row["made_or_bought"] == "bought")
    assert len(items(e, None)) == len(rows)
    assert cell("=1+1") == "'=1+1"
    assert cell(-1.0) == -1.0


def test_numbers_for_people() -> None:
    assert figures(0.0) == "0"
    assert figures(-1234.56) == "−1235"
    assert figures(0.02) == "0.020"
    assert figures(-1e-7) == "0"
    assert figures(math.inf) == "–"
    assert nice_ticks(0.0, 95.0) == [0.0, 25.0, 50.0, 75.0, 100.0]
    assert nice_ticks(-3.0, 9.0)[0] <= -3.0
