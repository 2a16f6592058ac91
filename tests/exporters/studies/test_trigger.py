"""The trigger study as it leaves: check.json's fixed names, the page with its histogram, the summary's line."""

from __future__ import annotations

import io
import json
import signal
import subprocess
import sys
from pathlib import Path
from xml.etree import ElementTree

import pytest
from rich.console import Console

from exporters.bill import bill_html
from exporters.check_json import check_document, dump
from exporters.studies.trigger import margin_picture, trigger_line, trigger_values
from exporters.summary import print_summary
from exporters.terminal import ShownLate
from loads.examine import Examination
from loads.studies.progress import listening, step
from loads.trigger import LEAST_CHANCE, TriggerStudy
from tests.exporters.examined import starter
from tests.starters import text_of

FIXED = ["hold_margin_mean_deg", "hold_margin_std_deg", "firing_chance", "margin_for_chance_deg", "chance"]


def loose(*lines: str, units: str = "metric") -> Examination:
    table = "\n".join(["[tolerances]", "samples = 2048", *lines, "", "[targets]\n"])
    return starter("impact-rig", ("[targets]\n", table), ('units = "metric"', f'units = "{units}"'))


def study(e: Examination) -> TriggerStudy:
    found = e.studies["trigger"]
    assert isinstance(found, TriggerStudy)
    return found


def test_fixed_names_come_first() -> None:
    row = json.loads(dump(check_document(loose())))["studies"]["trigger"]
    assert list(row)[:5] == FIXED
    assert row["hold_margin_drawn_deg"] == 4.0
    assert row["chance"] == 1e-4
    assert 0.0 < row["firing_chance"] < 1e-4  # a chance is never 0, however small
    assert row["firing_chance_is_at_most"] is (row["firing_chance"] == LEAST_CHANCE)
    assert sum(cause["share_of_variance"] for cause in row["causes"]) == pytest.approx(1.0, abs=1e-4)
    assert {cause["key"] for cause in row["causes"]} >= {"stop_position", "encoder_offset", "backlash", "sheave_x"}
    assert row["worn"]["stored_energy_mean_J"] < row["stored_energy_mean_J"]
    assert row["jolt"]["drive_holds_Nm"] is None
    assert row["jolt"]["acceleration_held_rad_s2"] is None


def test_the_check_is_among_the_others() -> None:
    document = check_document(loose("stop_position = 2", "chance = 1e-6"))
    (row,) = [row for row in document["checks"] if row["check"] == "hold margin for the stated chance"]
    assert row["holds"] is False
    assert row["capacity"] == pytest.approx(4.0)
    assert row["demand"] == pytest.approx(document["studies"]["trigger"]["margin_for_chance_deg"], abs=1e-5)
    assert any("may fire as soon as it is held" in text for text in document["cautions"])


def test_the_page_has_a_section_with_a_described_picture() -> None:
    e = loose()
    text = bill_html(e)
    assert '<h2 id="trigger">Tolerances and the trigger</h2>' in text
    assert 'aria-labelledby="hold-margins-title hold-margins-desc"' in text
    assert "&lt;svg" not in text
    assert "What matters most" in text
    assert "Bounce and vibration" in text
    assert 'id="trigger"' not in bill_html(starter("impact-rig"))


def test_the_histogram() -> None:
    e = loose()
    root = ElementTree.fromstring(margin_picture(study(e)))
    bars = [node for node in root.iter() if node.get("class") == "body"]
    assert len(bars) == len(study(e).shares)
    assert float(study(e).shares.sum()) == pytest.approx(1.0)
    description = next(node.text or "" for node in root if node.tag.endswith("desc"))
    assert "standard deviation" in description
    # bars are as high as their shares, on one ground line
    heights = []
    for bar in bars:
        ys = [float(pair.split(",")[1]) for pair in (bar.get("points") or "").split()]
        heights.append(max(ys) - min(ys))
    shares = [float(x) for x in study(e).shares]
    assert heights == pytest.approx([130.0 * x / max(shares) for x in shares], abs=0.02)


def test_us_units() -> None:
    values = trigger_values(loose(units="us"), study(loose(units="us")))
    assert any(row["name"] == "Pull at the hold in" for row in values["rows"])
    assert any("°/in" in row["slope"] for row in values["causes"])
    metric = {r["title"]: r for r in trigger_values(loose(), study(loose()))["causes"]}
    us = {r["title"]: r for r in values["causes"]}
    a, b = (float(x["link length"]["slope"].split()[0]) for x in (metric, us))
    assert b == pytest.approx(25.4 * a, rel=0.01)


def test_the_summary_has_a_line() -> None:
    e = loose()
    out = io.StringIO()
    print_summary(e, Console(file=out, width=80))
    text = " ".join(out.getvalue().split())
    assert "Tolerances: the disc is held 3.75° ± 0.35° (one standard deviation) short of firing" in text
    assert "What matters most: stop across the link" in text
    assert all(len(line) <= 80 for line in out.getvalue().splitlines())
    assert "less than 1e-12" in trigger_line(e, study(e)) or "e-" in trigger_line(e, study(e))


def test_progress_is_told_to_who_listens() -> None:
    heard: list[tuple[str, int, int]] = []
    with listening(lambda *told: heard.append(told)):
        step("tolerances", 1, 3)
    step("tolerances", 2, 3)
    assert heard == [("tolerances", 1, 3)]


def test_a_plain_check_loads_no_statistics(tmp_path: Path) -> None:
    design = tmp_path / "rig.toml"
    script = (
        "import sys\nfrom pathlib import Path\nfrom loads.examine import examine\n"
        f"examine(Path({str(design)!r}))\n"
        "print(sorted(m for m in sys.modules if m.startswith(('scipy.stats', 'scipy.special', 'cadquery', 'OCP'))))"
    )
    for table, wanted in (("", False), ("\n[tolerances]\nsamples = 1024\n", True)):
        design.write_text(text_of("impact-rig") + table, encoding="utf-8")
        done = subprocess.run([sys.executable, "-c", script], check=True, capture_output=True, text=True)
        assert ("scipy.stats" in done.stdout) is wanted
        assert "cadquery" not in done.stdout


def test_an_interruption_is_held_back_only_from_the_first_step_on() -> None:
    before = signal.getsignal(signal.SIGINT)
    with ShownLate() as report:
        assert signal.getsignal(signal.SIGINT) is before
        report("tolerances", 0, 2)
        assert signal.getsignal(signal.SIGINT) is not before
    assert signal.getsignal(signal.SIGINT) is before


def test_an_interruption_between_two_steps_stops_the_work() -> None:
    def work(asked: int) -> None:
        with ShownLate() as report:
            for i in range(2):
                report("tolerances", i, 2)
                if i == asked:
                    signal.raise_signal(signal.SIGINT)

    for asked in (0, 1):  # between two steps, and after the last one
        with pytest.raises(KeyboardInterrupt):
            work(asked)
    work(-1)
