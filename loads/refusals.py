"""Mechanisms that cannot exist, and sizes that a material is not made in: what only the loads' room can tell."""

from __future__ import annotations

import math

from loads.cycle import Cycle
from loads.proportions.basis import BAR, PLATE
from parts.catalogue import Catalogue
from parts.design import Design, Material
from parts.problems import Problem
from parts.sizes import Sizes

MOST_WRAP = math.radians(270.0)


def mechanism_problems(design: Design, figures: Cycle) -> tuple[Problem, ...]:
    """Everything that makes a design's mechanism impossible, each with its key and what would be accepted."""
    at = figures.events
    m = design.mechanism
    beta = f"{math.degrees(m.seat_angle):g} deg"
    for name, event in (("catch", at.catch), ("release", at.release), ("null", at.null)):
        if math.isnan(float(event)):
            text = f"the mechanism has no {name}: the chain never {_MISSING[name]}"
            return (
                Problem(
                    "mechanism.seat_angle", None, beta, "a seat angle nearer to 0 deg, or a sheave farther away", text
                ),
            )
    problems = []
    if float(figures.most_wrap) > MOST_WRAP or float(figures.least_wrap) < 0.0:
        wrap = f"a wrap of {math.degrees(figures.least_wrap):.1f} to {math.degrees(figures.most_wrap):.1f} deg over the turn"
        key = "sheave.exit_angle" if design.sheave.exit_angle is not None else "sheave.wrap"
        text = "the chain would cross itself, or leave the sheave: above 270 deg or below 0"
        problems.append(Problem(key, None, wrap, "a wrap within 0 and 270 deg at every crank angle", text))
    slack, most_pull = design.chain.slack, float(figures.most_pull)
    if slack >= most_pull:
        text = "the slack is never taken up"
        problems.append(
            Problem("chain.slack", None, f"{slack:g} mm", f"less than the whole pull, {most_pull:.2f} mm", text)
        )
    table = design.spring.table
    if table is not None and most_pull - slack > float(table[0, -1]) + 1e-9:
        problems.append(
            Problem(
                "spring.table", None, f"a last draw of {float(table[0, -1]):g} mm",
                f"points up to the largest draw, {most_pull - slack:.2f} mm", "the table ends before the spring does",
            )
        )  # fmt: skip
    if float(at.hold) <= float(at.catch):
        most = math.degrees(float(at.first_end) - float(at.catch))
        text = "the hold lies before the catch"
        found = f"{math.degrees(m.hold_margin):g} deg"
        problems.append(Problem("mechanism.hold_margin", None, found, f"less than {most:.2f} deg", text))
    return tuple(problems)


def given_size_problems(design: Design, catalogue: Catalogue) -> tuple[Problem, ...]:
    """Sizes that the design gives and that the material, given or proportioned, is not listed for."""
    d, plate, bar = design, catalogue.materials[PLATE], catalogue.materials[BAR]
    rows: tuple[tuple[str, float | None, Material], ...] = (
        ("disc.thickness", d.disc.thickness, d.disc.material or plate),
        ("link.thickness", d.link.thickness, d.link.material or plate),
        ("stop.diameter", d.stop.diameter, d.stop.material or bar),
        ("stop.width", d.stop.width, d.stop.material or bar),
        ("crank_pin.diameter", d.crank_pin.diameter, d.crank_pin.material or bar),
        ("chain_pin.diameter", d.chain_pin.diameter, d.chain_pin.material or bar),
        ("chain_end.width", d.chain_end.width, d.chain_end.material or bar),
        ("shaft.diameter", d.shaft.diameter, d.shaft.material or bar),
        ("sheave.pin_diameter", d.sheave_pin.diameter, d.sheave_pin.material or bar),
    )
    return tuple(
        Problem(
            key, None, f"{size:g} mm of {material.name}",
            f"over 0 and up to {material.largest_size:g} mm, what {material.name} is listed for; or another material",
            "outside the material's table",
        )
        for key, size, material in rows
        if size is not None and not material.covers(size)
    )  # fmt: skip


def proportioned_size_problems(design: Design, sizes: Sizes) -> tuple[Problem, ...]:
    """Sizes that follow from others (a chain end's from its chain) and that the part's material is not listed for."""
    z, d = sizes, design
    rows: tuple[tuple[str, str, float, float | None, Material], ...] = (
        ("disc", "thickness", z.disc.thickness, d.disc.thickness, z.disc.material),
        ("link", "thickness", z.link.thickness, d.link.thickness, z.link.material),
        ("stop", "diameter", z.stop.diameter, d.stop.diameter, z.stop.material),
        ("stop", "width", z.stop.width, d.stop.width, z.stop.material),
        ("crank_pin", "diameter", z.crank_pin.diameter, d.crank_pin.diameter, z.crank_pin.material),
        ("chain_pin", "diameter", z.chain_pin.diameter, d.chain_pin.diameter, z.chain_pin.material),
        ("chain_pin", "middle diameter", z.chain_pin.middle_diameter, None, z.chain_pin.material),
        ("chain_end", "width", z.chain_end.width, d.chain_end.width, z.chain_end.material),
    )
    return tuple(
        Problem(
            f"{part}.material", None, f"{material.name} for a {what} of {size:g} mm",
            f"a material listed for {size:g} mm; {material.name} is for over 0 and up to {material.largest_size:g} mm",
            "the part needs more than the material's table has",
        )
        for part, what, size, given, material in rows
        if given is None and not material.covers(size)
    )  # fmt: skip


_MISSING = {
    "catch": "turns far enough for the stop to meet the link",
    "release": "lifts the link off its stop, or never presses it on",
    "null": "passes over the disc axis",
}
