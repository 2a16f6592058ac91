"""How every study leaves, by its name."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

from exporters.studies import backing_off, drive, enclosure, fatigue, power_loss, release, trigger
from exporters.studies.leaving import Leaving, Step
from loads.examine import Examination

LEAVING: Mapping[str, Leaving] = {
    "power_loss": power_loss.LEAVING,
    "release": release.LEAVING,
    "fatigue": fatigue.LEAVING,
    "trigger": trigger.LEAVING,
    "drive": drive.LEAVING,
    "backing_off": backing_off.LEAVING,
    "enclosure": enclosure.LEAVING,
}


def study_rows(e: Examination) -> dict[str, Any]:
    """``studies`` of check.json: the studies that ran, by name."""
    return {name: LEAVING[name].row(e, study) for name, study in e.studies.items()}


def study_sections(e: Examination) -> list[dict[str, Any]]:
    """For the page: key, title, template and values of each study that ran."""
    return [
        {
            "key": name, "title": LEAVING[name].title, "template": f"study_{name}.html",
            "values": LEAVING[name].page(e, study),
        }
        for name, study in e.studies.items()
    ]  # fmt: skip


def study_lines(e: Examination) -> list[str]:
    """For the summary: a line or two of each study that ran and has something to say in short."""
    lines = [LEAVING[name].line(e, study) for name, study in e.studies.items()]
    return [line for line in lines if line]


def study_files(e: Examination) -> Iterator[Step]:
    """Files of their own that studies write into the folder."""
    for name, study in e.studies.items():
        if (files := LEAVING[name].files) is not None:
            yield from files(e, study)
