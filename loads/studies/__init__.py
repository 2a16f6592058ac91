"""Studies on top of the checks, one module each: what they find, what they check, what they caution of.

A study is a function of the context that returns its record, or None where the design does not ask for it. A new one is
a file here, a line in ``loads.studies.registry``, and how it leaves in ``exporters.studies``.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import Protocol, runtime_checkable

from loads.records import Check
from parts.design import Assumed


class Study(Protocol):
    """What every study's record has."""

    @property
    def checks(self) -> tuple[Check, ...]: ...

    @property
    def cautions(self) -> tuple[str, ...]: ...


@runtime_checkable
class Assuming(Protocol):
    """What a study has that settles values of its own which the design leaves out."""

    @property
    def assumed(self) -> tuple[Assumed, ...]: ...


def assumed_by(studies: Iterable[Study]) -> tuple[Assumed, ...]:
    """What studies have assumed on top of the design's own defaults."""
    return tuple(row for study in studies if isinstance(study, Assuming) for row in study.assumed)
