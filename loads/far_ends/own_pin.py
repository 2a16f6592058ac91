"""The pin that joins a far end to the plate on the chain pin, where it is not the far end's own."""

from __future__ import annotations

from loads.checks.context import Context, length_of
from loads.checks.pins import double_shear_moment, pin_checks
from loads.records import Check


def own_pin(c: Context, part: str) -> list[Check]:
    """Shear and bending in double shear, of the chain pin's grade."""
    end, pin = c.sizes.chain_end, c.sizes.chain_pin
    span = c.design.far_end.pin_span(end.width, end.slots, c.stack.plate_gap)
    assert span is not None
    force = length_of(c.members.chain_on_pin)
    moment = double_shear_moment(force, *span)
    return pin_checks(c, part, "middle", end.pin_diameter, pin.material, force / 2.0, moment, False)
