"""Every study, in the order in which they run and are shown. The name is its key in ``studies`` of check.json."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from loads.backing_off import backing_off_study
from loads.checks.context import Context
from loads.drive import drive_study
from loads.enclosure import enclosure_study
from loads.fatigue.study import fatigue_study
from loads.power_loss.study import power_loss_study
from loads.studies import Study
from loads.trigger import trigger_study

STUDIES: Mapping[str, Callable[[Context], Study | None]] = {
    "power_loss": power_loss_study,
    "fatigue": fatigue_study,
    "trigger": trigger_study,
    "drive": drive_study,
    "backing_off": backing_off_study,
    "enclosure": enclosure_study,
}


def run_studies(c: Context) -> dict[str, Study]:
    """The studies that the design asks for, by name."""
    found = {name: run(c) for name, run in STUDIES.items()}
    return {name: study for name, study in found.items() if study is not None}
