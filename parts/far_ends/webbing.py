"""Flat woven webbing as the far end: a listed sling, or the maker's own least breaking force, with sewn eyes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated, ClassVar

from parts.far_ends.base import PRACTICE, EndForm, FarEnd
from parts.far_ends.reading import Found, Kind, Source
from parts.far_ends.rope import fork, fork_span
from parts.problems import Problem
from parts.schema_values import Length, LengthOrNone, Table, number, quantity

NAME = "webbing"
CHEEK = 0.25  # of the webbing's width: each cheek of the fork that holds its eye
LEAST_CHEEK = 8.0  # mm
OVER_PIN = 4.0  # of its own thickness: the eye's height over the pin, both sides and some room


class WebbingTable(Table):
    width: Length | None = None
    thickness: Length | None = None
    min_breaking_force: Annotated[float | None, quantity("force", least=1, most=1e9)] = None
    least_sheave_ratio: Annotated[float | None, number(least=1, most=200)] = None
    mass_per_metre: Annotated[float | None, quantity("mass_per_length", least=0, most=1e4)] = None
    slack: LengthOrNone | None = None
    run_to_spring: LengthOrNone | None = None


@dataclass(frozen=True, kw_only=True)
class Webbing(FarEnd):
    """The strength is that of the sling with its sewn eyes."""

    table: ClassVar[str] = NAME
    usual_factor: ClassVar[tuple[float, str]] = (7.0, "EN 1492-1, from memory: breaking force over working load")

    stretch: ClassVar[tuple[float, str]] = (2.4, "6 % at the working load, a seventh of the strength; from memory")

    width: float
    thickness: float
    least_sheave_ratio: float  # diameter over thickness

    @property
    def plane_width(self) -> float:
        return self.width

    @property
    def height(self) -> float:
        return OVER_PIN * self.thickness

    @property
    def thickness_on_sheave(self) -> float:
        return self.thickness

    @property
    def usual_sheave(self) -> tuple[float, str]:
        why = f"{self.least_sheave_ratio:g} times its thickness across, {PRACTICE}"
        return self.least_sheave_ratio * self.thickness / 2.0, why

    @property
    def pin_note(self) -> str:
        return "that the sewn eye goes round, smooth"

    def pin_span(
        self, width: float, slots: tuple[tuple[float, float], ...], gap: float
    ) -> tuple[float, float, float] | None:
        return fork_span(width, slots, self.width)

    def end_form(self) -> EndForm:
        """A fork about the eye, as wide as the webbing and some play."""
        slot = 1.05 * self.width + 1.0
        width = slot + 2.0 * max(CHEEK * self.width, LEAST_CHEEK)
        return fork(width, slot, self.height, f"a fork about the sewn eye, {PRACTICE}", share=0.55)


def read(table: Table, source: Source) -> Found:
    """A listed width, or one of one's own with its least breaking force."""
    assert isinstance(table, WebbingTable)
    found, listed = Found(), None
    if "width" not in source.raw:
        found.problems.append(Problem("webbing.width", None, "nothing", "width = …", "missing"))
    if table.width is None:
        return found
    listed = source.catalogue.webbings.get(f"{table.width:g}")
    if listed is None and "min_breaking_force" not in source.raw:
        widths = ", ".join(source.catalogue.webbings)
        accepted = f"a listed width, {widths} mm; or min_breaking_force as well"
        found.problems.append(Problem("webbing.width", None, f"{table.width:g} mm", accepted, "not listed"))
    if found.problems or any(getattr(table, key) is None for key in ("min_breaking_force",) if key in source.raw):
        return found
    own = table.min_breaking_force
    force = own if own is not None else listed.breaking_force if listed is not None else 0.0
    thickness, ratio = table.thickness, table.least_sheave_ratio
    if thickness is None:
        thickness = listed.thickness if listed is not None else 7.0
        found.assume("webbing.thickness", thickness, "length", "two layers of a flat woven sling, from memory")
    if ratio is None:
        ratio = source.catalogue.sheave_ratio_of_webbing
        found.assume("webbing.least_sheave_ratio", ratio, "number", f"sheave diameter over thickness, {PRACTICE}")
    if table.slack is None:
        found.assume("webbing.slack", 0.0, "length", "webbing just taut at the start")
    found.far_end = Webbing(
        designation=f"webbing {table.width:g} mm" if listed is None else listed.designation,
        min_tensile_strength=force,
        mass_per_metre=table.mass_per_metre,
        slack=table.slack or 0.0,
        source="the design file" if own is not None or listed is None else listed.source,
        confirmed=own is not None or (listed is not None and listed.confirmed),
        run_to_spring=table.run_to_spring,
        width=table.width,
        thickness=thickness,
        least_sheave_ratio=ratio,
    )
    return found


KIND = Kind(NAME, WebbingTable, read)
