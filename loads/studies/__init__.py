"""Studies on top of the checks, one module each: what they find, what they check, what they caution of.

A study is a function of the context that returns its record, or None where the design does not ask for it. A new one is
a file here, a line in ``loads.studies.registry``, and how it leaves in ``exporters.studies``.
"""

from __future__ import annotations

from typing import Protocol

from loads.records import Check


class Study(Protocol):
    """What every study's record has."""

    @property
    def checks(self) -> tuple[Check, ...]: ...

    @property
    def cautions(self) -> tuple[str, ...]: ...
