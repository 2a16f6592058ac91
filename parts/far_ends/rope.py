"""A wire rope as the far end: listed, or with the maker's own least breaking force, and the fitting that it ends in."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated, ClassVar, Literal

from parts.catalogue import Catalogue, RopeEnd
from parts.catalogue import Rope as ListedRope
from parts.far_ends.base import PRACTICE, EndForm, FarEnd
from parts.far_ends.reading import Found, Kind, Source
from parts.problems import Problem, nearest, written
from parts.schema_values import Length, LengthOrNone, Table, Text, number, quantity

NAME = "rope"
OWN = ("diameter", "min_breaking_force")
CHEEK = 0.5  # of the fitting's width: each cheek of the fork that holds it
USUAL_END = "thimble with pressed ferrule"


class RopeTable(Table):
    designation: Text | None = None
    grade: Literal[1770, 1960] | None = None
    diameter: Length | None = None
    min_breaking_force: Annotated[float | None, quantity("force", least=1, most=1e9)] = None
    least_sheave_ratio: Annotated[float | None, number(least=1, most=200)] = None
    mass_per_metre: Annotated[float | None, quantity("mass_per_length", least=0, most=1e4)] = None
    end: Text | None = None
    end_efficiency: Annotated[float | None, number(above=0, most=1)] = None
    eye_width: Length | None = None
    eye_height: Length | None = None
    eye_pin: Length | None = None
    slack: LengthOrNone | None = None
    run_to_spring: LengthOrNone | None = None


@dataclass(frozen=True, kw_only=True)
class Rope(FarEnd):
    """``min_tensile_strength`` is the rope's least breaking force times what its end carries of it."""

    table: ClassVar[str] = NAME

    diameter: float
    breaking_force: float  # of the rope by itself
    least_sheave_ratio: float
    end: RopeEnd
    eye_width: float  # of the fitting, along the pin
    eye_height: float
    eye_pin: float  # the thickest that the fitting takes

    @property
    def plane_width(self) -> float:
        return max(self.eye_width, self.diameter)

    @property
    def height(self) -> float:
        return max(self.eye_height, self.diameter)

    @property
    def thickness_on_sheave(self) -> float:
        return self.diameter

    @property
    def usual_sheave(self) -> tuple[float, str]:
        why = f"{self.least_sheave_ratio:g} rope diameters across, {PRACTICE}"
        return self.least_sheave_ratio * self.diameter / 2.0, why

    @property
    def pin_note(self) -> str:
        return f"that the {self.end.name} hangs on"

    def pin_span(
        self, width: float, slots: tuple[tuple[float, float], ...], gap: float
    ) -> tuple[float, float, float] | None:
        return fork_span(width, slots, self.eye_width)

    def end_form(self) -> EndForm:
        """A fork about the fitting."""
        slot = 1.05 * self.eye_width + 0.5
        natural = slot + 2.0 * CHEEK * self.eye_width
        return fork(natural, slot, self.eye_height, f"a fork about the {self.end.name}, {PRACTICE}")


def fork(width: float, slot: float, height: float, why: str, share: float = 0.0) -> EndForm:
    """A plate with one slot in its middle, deep enough for an eye of a height and of a share of its pin's diameter."""
    return EndForm(width, why, (width - slot) / 2.0, ((0.0, slot / 2.0),), 0.55 * height + 1.0, share, 1.0)


def fork_span(width: float, slots: tuple[tuple[float, float], ...], eye: float) -> tuple[float, float, float]:
    """Cheek, eye and gap (mm) of a fork ``width`` wide about an eye."""
    slot = 2.0 * slots[0][1]
    return max((width - slot) / 2.0, 1e-6), eye, max((slot - eye) / 2.0, 0.0)


def read(table: Table, source: Source) -> Found:
    """A listed rope with what the table puts over it, or one of one's own."""
    assert isinstance(table, RopeTable)
    found = Found()
    listed = _listed(table, source, found)
    end = _end(table, source, found)
    if found.problems or end is None:
        return found
    grade = table.grade
    if grade is None and table.min_breaking_force is None:
        grade = 1770
        found.assume("rope.grade", 1770.0, "stress", f"the commoner rope grade, {PRACTICE}")
    force, diameter = table.min_breaking_force, table.diameter
    words = [f"{key} from the design file" for key in OWN if getattr(table, key) is not None]
    if listed is not None:
        by_grade = listed.breaking_force_1960 if grade == 1960 else listed.breaking_force_1770
        force, diameter = force or by_grade, diameter or listed.diameter
        words = [
            listed.source + (f"; {', '.join(listed.from_memory)} from memory" if listed.from_memory else ""),
            *words,
        ]
    assert force is not None
    assert diameter is not None
    efficiency = table.end_efficiency
    if efficiency is None:
        efficiency = end.efficiency
        found.assume("rope.end_efficiency", efficiency, "number", f"{end.name}: {end.source}")
        words.append(f"end {efficiency:g} of it: {end.source}")
    ratio = table.least_sheave_ratio
    if ratio is None:
        ratio = 34.0 if listed is None else listed.least_sheave_ratio
        if listed is None:
            found.assume("rope.least_sheave_ratio", ratio, "number", f"of six strands of 19 wires, {PRACTICE}")
    if table.slack is None:
        found.assume("rope.slack", 0.0, "length", "a rope just taut at the start")

    def size(key: str, given: float | None, share: float, what: str) -> float:
        if given is not None:
            return given
        value = round(share * diameter, 1)
        found.assume(f"rope.{key}", value, "length", f"{share:g} rope diameters, {what}; {PRACTICE}")
        return value

    found.far_end = Rope(
        designation=_name(table, listed, diameter, grade),
        min_tensile_strength=force * efficiency,
        mass_per_metre=table.mass_per_metre if listed is None else table.mass_per_metre or listed.mass_per_metre,
        slack=table.slack or 0.0,
        source="; ".join(words),
        confirmed=(listed is None or listed.confirmed) and (end.confirmed or table.end_efficiency is not None),
        run_to_spring=table.run_to_spring,
        diameter=diameter,
        breaking_force=force,
        least_sheave_ratio=ratio,
        end=end,
        eye_width=size("eye_width", table.eye_width, end.width, f"the {end.name} along the pin"),
        eye_height=size("eye_height", table.eye_height, end.height, f"the {end.name} across the pull"),
        eye_pin=size("eye_pin", table.eye_pin, end.pin, f"the thickest pin that the {end.name} takes"),
    )
    return found


def _name(table: RopeTable, listed: ListedRope | None, diameter: float, grade: int | None) -> str:
    if listed is None:
        return f"own rope {diameter:g} mm"
    return listed.designation + (f" grade {grade}" if grade is not None else "")


def _listed(table: RopeTable, source: Source, found: Found) -> ListedRope | None:
    if "designation" not in source.raw:
        absent = [key for key in OWN if key not in source.raw]
        if len(absent) == len(OWN):
            accepted = f"a listed rope, or {' and '.join(OWN)}"
            found.problems.append(Problem("rope.designation", None, "nothing", accepted, "missing"))
        else:
            accepted = "{} = …, or the designation of a listed rope"
            found.problems += [Problem(f"rope.{k}", None, "nothing", accepted.format(k), "missing") for k in absent]
        return None
    if table.designation is None:
        return None  # refused already
    rope = source.catalogue.ropes.get(table.designation)
    if rope is None:
        accepted = _nearest_rope(table.designation, source.catalogue)
        found.problems.append(Problem("rope.designation", None, written(table.designation), accepted, "not listed"))
    return rope


def _nearest_rope(name: str, catalogue: Catalogue) -> str:
    near = nearest(name, list(catalogue.ropes))
    kinds = dict.fromkeys(rope.construction for rope in catalogue.ropes.values())
    sizes = "construction and diameter in mm, such as 6x19-IWRC 12"
    return (f"{near} (the nearest); " if near else "") + f"{sizes}; constructions: {', '.join(kinds)}"


def _end(table: RopeTable, source: Source, found: Found) -> RopeEnd | None:
    if table.end is None and "end" in source.raw:
        return None  # refused already
    if table.end is None:
        found.assume("rope.end", USUAL_END, "text", f"the commonest fitting, {PRACTICE}")
    name = table.end or USUAL_END
    end = source.catalogue.rope_ends.get(name)
    if end is None:
        near = nearest(name, list(source.catalogue.rope_ends))
        accepted = (f'"{near}" (the nearest); ' if near else "") + ", ".join(source.catalogue.rope_ends)
        found.problems.append(Problem("rope.end", None, written(name), accepted, "not listed"))
    return end


KIND = Kind(NAME, RopeTable, read)
