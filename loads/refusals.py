"""Mechanisms that cannot exist, and sizes that a material is not made in: what only the loads' room can tell."""

from __future__ import annotations

import math
from collections.abc import Iterable

from loads.cycle import Cycle
from loads.far_ends.registry import behaviour
from loads.proportions.basis import BAR, PLATE
from parts.catalogue import Catalogue
from parts.design import Design, Material
from parts.problems import Problem
from parts.quantities import problem_with_inches
from parts.sizes import Sizes


def mechanism_problems(design: Design, figures: Cycle) -> tuple[Problem, ...]:
    """Everything that makes a design's mechanism impossible, each with its key and what would be accepted."""
    at = figures.events
    m = design.mechanism
    beta = f"{math.degrees(m.seat_angle):g} deg"
    for name, event in (("catch", at.catch), ("release", at.release), ("null", at.null)):
        if math.isnan(float(event)):
            text = f"the mechanism has no {name}: the {design.far_end.noun} never {_MISSING[name]}"
            farther = (
                "a sheave farther away" if design.far_end.over_sheave else "a longer tie, or another slide or pivot"
            )
            accepted = f"a seat angle nearer to 0 deg, or {farther}"
            return (Problem("mechanism.seat_angle", None, beta, accepted, text),)
    problems = list(behaviour(design).problems(design, figures))
    slack, most_pull = design.far_end.slack, float(figures.most_pull)
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
    return _shown(design, problems)


def given_size_problems(design: Design, catalogue: Catalogue) -> tuple[Problem, ...]:
    """Sizes that the design gives and that the material, given or proportioned, is not listed for."""
    d, plate, bar = design, catalogue.materials[PLATE], catalogue.materials[BAR]
    far = d.far_end
    rows: tuple[tuple[str, float | None, Material], ...] = (
        ("disc.thickness", d.disc.thickness, d.disc.material or plate),
        ("link.thickness", d.link.thickness, d.link.material or plate),
        ("stop.diameter", d.stop.diameter, d.stop.material or bar),
        ("stop.width", d.stop.width, d.stop.material or bar),
        ("crank_pin.diameter", d.crank_pin.diameter, d.crank_pin.material or bar),
        ("chain_pin.diameter", d.chain_pin.diameter, d.chain_pin.material or bar),
        (f"{far.part}.{far.width_key}", d.chain_end.width, d.chain_end.material or (bar if far.over_sheave else plate)),
        ("shaft.diameter", d.shaft.diameter, d.shaft.material or bar),
        ("sheave.pin_diameter", d.sheave_pin.diameter, d.sheave_pin.material or bar),
    )
    problems = (
        Problem(
            key, None, f"{size:g} mm of {material.name}",
            f"over 0 and up to {material.largest_size:g} mm, what {material.name} is listed for; or another material",
            "outside the material's table",
        )
        for key, size, material in rows
        if size is not None and not material.covers(size)
    )  # fmt: skip
    return _shown(design, problems)


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
        (d.far_end.part, d.far_end.width_key, z.chain_end.width, d.chain_end.width, z.chain_end.material),
    )
    problems = (
        Problem(
            f"{part}.material", None, f"{material.name} for a {what} of {size:g} mm",
            f"a material listed for {size:g} mm; {material.name} is for over 0 and up to {material.largest_size:g} mm",
            "the part needs more than the material's table has",
        )
        for part, what, size, given, material in rows
        if given is None and not material.covers(size)
    )  # fmt: skip
    return _shown(design, problems)


def _shown(design: Design, problems: Iterable[Problem]) -> tuple[Problem, ...]:
    """The problems as the design's units have them shown: mm, and inches beside them where those are wanted."""
    return tuple(problems if design.identity.units == "metric" else map(problem_with_inches, problems))


_MISSING = {
    "catch": "turns far enough for the stop to meet the link",
    "release": "lifts the link off its stop, or never presses it on",
    "null": "passes over the disc axis",
}
