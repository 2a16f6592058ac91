"""The study of power loss as it leaves: in check.json, on the page, in the summary, as pictures."""

from __future__ import annotations

import io
import json
import math
import re
from xml.etree import ElementTree

import pytest
from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.power_loss import power_loss_line, power_loss_values, seat_text, span_text
from exporters.studies.power_loss_pictures import fate_ring, trade_picture
from exporters.summary import print_summary
from loads.examine import Examination
from loads.power_loss.study import PowerLoss
from tests.exporters.examined import STARTERS, starter

SVG = "{http://www.w3.org/2000/svg}"
LATE = ('seat_angle = "3 deg"', 'seat_angle = "-2 deg"')
US = ('units = "metric"', 'units = "us"')


def study_of(e: Examination) -> PowerLoss:
    found = e.studies["power_loss"]
    assert isinstance(found, PowerLoss)
    return found


def row_of(e: Examination) -> dict[str, object]:
    found = json.loads(dump(check_document(e)))["studies"]["power_loss"]
    assert isinstance(found, dict)
    return found


@pytest.mark.parametrize("name", STARTERS)
def test_names_that_are_fixed(name: str) -> None:
    e = starter(name)
    document = json.loads(dump(check_document(e)))
    row, events = document["studies"]["power_loss"], document["events"]
    assert list(row)[:3] == ["bands", "least_seat_angle_deg", "self_firing_deg"]
    bands = row["bands"]
    for band in bands:
        assert list(band)[:5] == ["from_deg", "to_deg", "fate", "energy_from_J", "energy_to_J"]
        assert band["fate"] in ("unwinds", "stays", "runs on")
    assert bands[0]["from_deg"] == 0.0
    assert bands[-1]["to_deg"] == events["release_deg"]
    assert [b["to_deg"] for b in bands[:-1]] == [b["from_deg"] for b in bands[1:]]
    assert [b["energy_to_J"] for b in bands[:-1]] == [b["energy_from_J"] for b in bands[1:]]
    # to the energy at the hold, which is near the top
    assert max(b["energy_to_J"] for b in bands) == pytest.approx(document["cycle"]["stored_energy_J"], rel=0.01)
    null, lets_go = row["self_firing_deg"]
    assert null == events["null_deg"]
    assert lets_go == row["release_with_friction_deg"] > events["release_deg"]
    designed = [r for r in row["trade"] if "as designed" in r["marks"]]
    assert [r["seat_angle_deg"] for r in designed] == [row["seat_angle_deg"]]
    assert designed[0]["energy_at_hold_J"] == document["cycle"]["stored_energy_J"]
    marks = {s["mark"]: s["seat_angle_deg"] for s in row["shims"]}
    assert marks["recommended"] == row["recommended_seat_angle_deg"]
    assert marks["least"] == row["least_seat_angle_deg"]


def test_a_late_link_fires_only_when_driven() -> None:
    row = row_of(starter("soil-tamper", LATE))
    assert row["self_firing_deg"] is None
    bands = row["bands"]
    assert isinstance(bands, list)
    fates = [b["fate"] for b in bands]
    assert fates == ["stays", "unwinds", "stays", "runs on", "stays", "unwinds", "stays"][: len(fates)]
    last = next(b for b in reversed(bands) if b["fate"] == "unwinds")
    assert last["creep_ends"] == "at rest, loaded"
    assert last["hill"]["arriving_J"] > last["hill"]["takes_J"] > 0.0
    assert last["coast"]["to_deg"] < 0.0


def test_the_summary_has_a_line() -> None:
    e = starter("soil-tamper", LATE)
    text = power_loss_line(e, study_of(e))
    own = study_of(e).designed.outcome
    assert f"up to {math.degrees(own.unwinds_to):.1f}°" in text
    for s in own.middle:
        assert f"{s.fate} at {math.degrees(s.start):.1f}–{math.degrees(s.end):.1f}°" in text
    assert "Seat angle −2.00°, least 1.63°, recommended 2.50°." in text
    assert "fires itself" not in text
    assert "fires itself from" in power_loss_line(starter("soil-tamper"), study_of(starter("soil-tamper")))
    out = io.StringIO()
    print_summary(e, Console(file=out, width=80))
    assert " ".join(text.split()) in " ".join(out.getvalue().split())
    assert all(len(line) <= 80 for line in out.getvalue().splitlines())


def test_no_caution_is_said_twice() -> None:
    cautions = starter("soil-tamper").cautions
    assert sum("fires by itself" in text or "drives the disc forwards" in text for text in cautions) == 1
    late = starter("soil-tamper", LATE).cautions
    assert sum("without drive" in text.lower() or "Without its drive" in text for text in late) == 1


def test_the_page_has_a_section() -> None:
    e = starter("impact-rig")
    text = bill_html(e)
    assert '<h2 id="power_loss">When the drive is gone</h2>' in text
    study = study_of(e)
    part = text[text.index('<h2 id="power_loss">') :]
    part = part[: part.index("</section>")]
    for band in study.bands:
        assert f"{math.degrees(band.start):.1f}–{math.degrees(band.end):.1f}</th>" in part
    assert part.count("<tr") == 3 + len(study.bands) + len(study.rows) + len(study.shims)
    assert "tapered so that the flank lies flat" in part  # a block
    assert "wrapped round the post" in bill_html(starter("soil-tamper"))
    assert not re.search(r"\b(None|nan|inf)\b", re.sub(r"<svg.*?</svg>", "", part, flags=re.S))


def test_us_units() -> None:
    metric, us = starter("impact-rig"), starter("impact-rig", US)
    values, other = (power_loss_values(e, study_of(e)) for e in (metric, us))
    assert other["units"]["energy"] == "ft·lbf"
    assert "lb·in2" in other["inertia"]
    one, two = (float(v["bands"][-1]["energy_start"].replace(" ", "")) for v in (values, other))
    assert two == pytest.approx(one / 1.3558179, rel=1e-3)
    assert any("ft·lbf" in text for text in us.cautions if "stored" in text)
    thick = [row["thickness"] for row in other["shims"] if not row["mark"]]
    assert thick[:4] == ["0", "0.005", "0.010", "0.020"]


@pytest.mark.parametrize("changes", [(), (LATE,)])
def test_pictures_are_read_out_and_do_without_colour(changes: tuple[tuple[str, str], ...]) -> None:
    e = starter("soil-tamper", *changes)
    study = study_of(e)
    ring = fate_ring(e, study)
    tree = ElementTree.fromstring(ring.replace("<svg ", '<svg xmlns="http://www.w3.org/2000/svg" ', 1))
    assert tree.get("role") == "img"
    described = tree.findtext(f"{SVG}desc") or ""
    for band in study.bands:
        assert f"From {math.degrees(band.start):.1f}° to {math.degrees(band.end):.1f}° it {band.fate}." in described
    words = [" ".join(t.itertext()) for t in tree.iter(f"{SVG}text")]
    for band in study.bands:
        assert f"{band.fate} {math.degrees(band.start):.1f}–{math.degrees(band.end):.1f}°" in words
    kinds = {band.fate for band in study.bands}
    filled = {p.get("class") for p in tree.iter(f"{SVG}polygon")}
    assert ("dot" in filled) == ("runs on" in kinds)
    # hatching: strokes across the ring
    assert sum(p.get("class") == "scale" for p in tree.iter(f"{SVG}line")) >= 2 * sum(
        b.fate == "stays" for b in study.bands
    )
    plot = ElementTree.fromstring(trade_picture(study).replace("<svg ", '<svg xmlns="http://www.w3.org/2000/svg" ', 1))
    drawn = {p.get("class"): p for p in plot.iter(f"{SVG}polyline")}
    assert set(drawn) == {"curve", "chain"}  # solid and dashed
    for line in drawn.values():
        assert len((line.get("points") or "").split()) == len(study.rows)
    assert f"At {math.degrees(study.seat):.2f}°".replace("-", "−") in (plot.findtext(f"{SVG}desc") or "")


def test_the_ring_of_a_clockwise_machine_is_mirrored() -> None:
    """The start to the right; a ccw machine's band at a quarter turn lies above, a cw one's below."""

    def label_height(e: Examination) -> float:
        tree = ElementTree.fromstring(fate_ring(e, study_of(e)))
        return next(float(t[0].get("y") or 0) for t in tree.iter("text") if (t[0].text or "") == "unwinds")

    ccw = starter("impact-rig")  # its first band that unwinds lies round 90°
    assert label_height(ccw) < 0.0
    cw = starter("impact-rig", ('rotation = "ccw"', 'rotation = "cw"'), ('wrap = "left"', 'wrap = "right"'),
                 ('center = ["460 mm", "30 mm"]', 'center = ["460 mm", "-30 mm"]'), ('"-90 deg"', '"90 deg"'))  # fmt: skip
    assert [b.end for b in study_of(cw).bands] == pytest.approx([b.end for b in study_of(ccw).bands])
    heights = [float(t[0].get("y") or 0) for t in ElementTree.fromstring(fate_ring(cw, study_of(cw))).iter("text")
               if (t[0].text or "") == "unwinds"]  # fmt: skip
    assert max(heights) > 0.0


def test_texts() -> None:
    assert seat_text(None) == "none"
    assert seat_text(math.radians(-1.5)) == "−1.50°"
    assert span_text(None) == "–"
    assert span_text((0.0, math.pi)) == "0.0–180.0°"
