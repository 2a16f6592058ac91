"""How a study leaves: its row of check.json, its section of the page, its line of the summary, files of its own."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from loads.examine import Examination

Step = tuple[str, Callable[[Path], None]]


@dataclass(frozen=True)
class Leaving:
    """Functions of the examination and the study's record.

    ``page`` gives the values of ``templates/study_NAME.html`` (they are called ``study`` there), ``title`` the section's
    heading; ``files`` the steps that write files of its own into the folder.
    """

    title: str
    row: Callable[[Examination, Any], Any]
    page: Callable[[Examination, Any], dict[str, Any]]
    line: Callable[[Examination, Any], str | None]
    files: Callable[[Examination, Any], Iterator[Step]] | None = None
