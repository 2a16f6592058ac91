"""Checks with safety factors, one module a family. A new family is a file and a line in ``FAMILIES``."""

from __future__ import annotations

from collections.abc import Callable

from loads.checks import chain, eyes, fit, link, pins, stop
from loads.checks.context import Context
from loads.records import Check

FAMILIES: tuple[Callable[[Context], list[Check]], ...] = (
    chain.check,
    pins.check,
    eyes.check,
    link.check,
    stop.check,
    fit.check,
)


def all_checks(context: Context) -> tuple[Check, ...]:
    """Every family's rows, the least margin first."""
    rows = [row for family in FAMILIES for row in family(context)]
    return tuple(sorted(rows, key=lambda row: (row.margin, row.part, row.site, row.check)))
