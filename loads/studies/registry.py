"""Every study, in the order in which they run and are shown. The name is its key in ``studies`` of check.json."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from loads.checks.context import Context
from loads.fatigue.study import fatigue_study
from loads.studies import Study

STUDIES: Mapping[str, Callable[[Context], Study | None]] = {
    "fatigue": fatigue_study,
}


def run_studies(c: Context) -> dict[str, Study]:
    """The studies that the design asks for, by name."""
    found = {name: run(c) for name, run in STUDIES.items()}
    return {name: study for name, study in found.items() if study is not None}
