"""What leads from the chain pin to the spring: the checks of its kind."""

from __future__ import annotations

from loads.checks.context import Context
from loads.records import Check


def check(c: Context) -> list[Check]:
    from loads.far_ends.registry import behaviour  # here, for its kinds are made of other families' checks

    return behaviour(c.design).checks(c)
