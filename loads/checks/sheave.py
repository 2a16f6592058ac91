"""The sheave: its pin under both legs of the chain, and how sharply the chain bends over it."""

from __future__ import annotations

import math

from loads.checks.context import Context, length_of
from loads.checks.pins import double_shear_moment, pin_checks
from loads.practice import source, value
from loads.records import Check
from parts.design import Chain


def least_running_diameter(chain: Chain) -> float:
    """Least diameter (mm) to the pitch line that a chain may run over.

    Leaf chain: five pitches. Roller chain: the pitch circle p/sin(π/z) of the smallest wheel it is led over.
    Source: leaf chain makers' design notes to ISO 4347; the wheel's least teeth are common practice.
    """
    if chain.kind == "leaf":
        return value("sheave", "leaf") * chain.pitch
    return chain.pitch / math.sin(math.pi / value("sheave", "roller_teeth"))


def check(c: Context) -> list[Check]:
    """Pin in double shear between two cheeks; running diameter against the least."""
    pin = c.running.sheave_pin
    force = length_of(c.site("sheave_pin", "journal").force)
    moment = double_shear_moment(force, pin.cheek, pin.hub, pin.gap)
    rows = pin_checks(c, "sheave_pin", "journal", pin.diameter, pin.material, force / 2.0, moment, False)
    rows.append(
        c.shape_check(
            "sheave", "groove", "chain bends over the sheave", least_running_diameter(c.design.chain),
            2.0 * c.design.sheave.pitch_radius, "mm", "running diameter no less than the trade's least", source("sheave"),
        )
    )  # fmt: skip
    return rows
