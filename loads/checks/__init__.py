"""Checks with safety factors, one module a family. A new family is a file and a line in ``FAMILIES``."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from loads.checks import bearings, disc, eyes, far_end, fit, link, lock_pin, pins, press, room, shaft, stop
from loads.checks.context import Context
from loads.records import Check

FAMILIES: tuple[Callable[[Context], list[Check]], ...] = (
    far_end.check,
    pins.check,
    eyes.check,
    link.check,
    stop.check,
    press.check,
    disc.check,
    shaft.check,
    bearings.check,
    lock_pin.check,
    room.check,
    fit.check,
)


def all_checks(context: Context, of_studies: tuple[Check, ...] = ()) -> tuple[Check, ...]:
    """Every family's rows and those of the studies that ran, the least margin first."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):  # absurd sizes fall short, they do not crash
        rows = [row for family in FAMILIES for row in family(context)] + list(of_studies)
    return tuple(sorted(rows, key=lambda row: (row.margin, row.part, row.site, row.check)))
