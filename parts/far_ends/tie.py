"""A rigid tie as the far end: a plate from the chain pin to an output that runs on a slide or hangs on a rocker arm."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Annotated, ClassVar, Literal

from parts.design import ChainEndWish
from parts.far_ends.base import PRACTICE, EndForm, FarEnd, Units
from parts.far_ends.reading import Found, Kind, Source
from parts.problems import Problem, written
from parts.quantities import show
from parts.schema_values import Corner, Length, Table, Text, number, quantity

NAME = "tie"
_SLIDE, _ROCKER = ("slide_point", "draw_direction"), ("pivot", "arm", "side", "spring_arm", "exit_angle")
_NEEDED = {"slide": ("draw_direction",), "rocker": ("pivot", "arm")}
EFFICIENCY, PUSH = 0.95, 0.25
CHEEK = 0.6  # of the tie's thickness: each cheek of the output's fork; common practice, no source
LEAST_LENGTHS = 1.05  # of what the chain pin reaches round the disc: a tie that cannot fold flat on itself

_Angle = Annotated[float | None, quantity("angle", least=-360, most=360)]


class TieTable(Table):
    length: Length | None = None
    output: Literal["slide", "rocker"] | None = None
    slide_point: Corner | None = None
    draw_direction: _Angle = None
    pivot: Corner | None = None
    arm: Length | None = None
    side: Literal["left", "right"] | None = None
    spring_arm: Length | None = None
    exit_angle: _Angle = None
    efficiency: Annotated[float | None, number(above=0.2, most=1)] = None
    push: Annotated[float | None, quantity("force", least=0, most=1e9)] = None
    thickness: Length | None = None
    width: Length | None = None
    pin_diameter: Length | None = None
    material: Text | None = None


@dataclass(frozen=True, slots=True)
class Slide:
    """The output pin runs straight through ``point``; ``direction`` (rad, machine frame) is where drawing moves it."""

    point: tuple[float, float]
    direction: float


@dataclass(frozen=True, slots=True)
class Rocker:
    """The output pin turns about ``pivot`` on an arm; the spring pulls a sector of radius ``spring_arm`` on it.

    ``side``: of the line O→pivot on which the output pin lies, looking from O. ``exit_angle`` (rad, machine frame): where
    the spring's line leaves the sector; None: against the start direction's end, back along the tie.
    """

    pivot: tuple[float, float]
    arm: float
    side: Literal["left", "right"]
    spring_arm: float
    exit_angle: float | None


@dataclass(frozen=True, kw_only=True)
class Tie(FarEnd):
    """Its strength is that of its eyes and its section, which the checks work out: ``min_tensile_strength`` is 0."""

    table: ClassVar[str] = NAME
    part: ClassVar[str] = "tie"
    far_hole: ClassVar[str] = "output_eye"
    width_key: ClassVar[str] = "thickness"
    over_sheave: ClassVar[bool] = False

    length: float
    output: Slide | Rocker
    efficiency: float  # of the output's guide or bearings
    push: float | None  # the largest that the output may push back with, N; None: a share of the largest pull

    @property
    def length_of_plate(self) -> float:
        return self.length

    @property
    def plane_width(self) -> float:
        return 0.0

    @property
    def height(self) -> float:
        return 0.0

    @property
    def pin_note(self) -> str:
        return "of the output"

    def output_note(self, units: Units) -> str:
        if isinstance(self.output, Slide):
            return f"on a slide that draws towards {math.degrees(self.output.direction):g}°"
        arms = (show(x, "length", units) for x in (self.output.arm, self.output.spring_arm))
        return "rocker arm {}, spring on a sector of radius {}".format(*arms)

    def pin_span(
        self, width: float, slots: tuple[tuple[float, float], ...], gap: float
    ) -> tuple[float, float, float] | None:
        """In a fork of the output."""
        return CHEEK * width, width, gap

    def end_form(self) -> EndForm:
        """The tie is the plate; the proportions settle its thickness."""
        return EndForm(0.0, "", 0.0, (), 0.0, 0.0, 0.0)


def read(table: Table, source: Source) -> Found:
    """A tie with its output; the geometry must be able to exist."""
    assert isinstance(table, TieTable)
    found = Found()
    output = table.output
    if output is None and "output" not in source.raw:
        output = "rocker" if "pivot" in source.raw or "arm" in source.raw else "slide"
        found.assume("tie.output", output, "text", "by the keys that are given")
    if output is None:
        return found
    for key in ("length", *_NEEDED[output]):
        if key not in source.raw:
            found.problems.append(Problem(f"tie.{key}", None, "nothing", f"{key} = …", "missing"))
    for key in _SLIDE if output == "rocker" else _ROCKER:
        if key in source.raw:
            accepted = f'a tie without it; or output = "{"slide" if output == "rocker" else "rocker"}"'
            found.problems.append(
                Problem(f"tie.{key}", None, written(source.raw[key]), accepted, f"a {output} has none")
            )
    _too_short(table, source, found)
    if found.problems or any(getattr(table, key) is None for key in ("length", *_NEEDED[output])):
        return found
    length, efficiency = table.length or 0.0, table.efficiency
    if efficiency is None:
        efficiency = EFFICIENCY
        found.assume("tie.efficiency", efficiency, "number", f"a greased guide or bush, {PRACTICE}")
    if table.push is None:
        why = f"{PUSH:.0%} of the largest pull, when the output is stopped after the release; {PRACTICE}"
        found.assume("tie.push", f"{PUSH:.0%} of the pull", "text", why)
    found.far_end = Tie(
        designation=f"tie {length:g} mm",
        min_tensile_strength=0.0,
        mass_per_metre=None,
        slack=0.0,
        source="the design file",
        confirmed=True,
        length=length,
        output=_slide(table, found) if output == "slide" else _rocker(table, length, source, found),
        efficiency=efficiency,
        push=table.push,
    )
    found.end = ChainEndWish(table.thickness, table.width, table.pin_diameter, source.material(NAME, "material"))
    return found


def _slide(table: TieTable, found: Found) -> Slide:
    point = table.slide_point
    if point is None:
        point = (0.0, 0.0)
        found.assume("tie.slide_point", "the disc axis", "text", "a slide in line with the disc axis")
    return Slide(point, table.draw_direction or 0.0)


def _rocker(table: TieTable, length: float, source: Source, found: Found) -> Rocker:
    arm, side, spring_arm = table.arm or 0.0, table.side, table.spring_arm
    if side is None:
        side = "left"
        found.assume("tie.side", side, "text", "no side given")
    if spring_arm is None:
        spring_arm = arm
        found.assume("tie.spring_arm", arm, "length", "as long as the arm, so the spring moves as the output pin does")
    if table.exit_angle is None:
        found.assume("tie.exit_angle", "away along the tie", "text", "no direction given")
    return Rocker(table.pivot or (0.0, 0.0), arm, side, spring_arm, table.exit_angle)


def _too_short(table: TieTable, source: Source, found: Found) -> None:
    """A tie shorter than the circle that the chain pin can go round would fold flat on itself."""
    r, link = source.crank_radius, source.link_length
    if table.length is None or r is None or link is None:
        return
    around = r + max(r, link - r)
    if table.length < LEAST_LENGTHS * around:
        text = "a tie that short folds flat on itself as the disc turns"
        accepted = f"{LEAST_LENGTHS * around:.6g} mm or more"
        found.problems.append(Problem("tie.length", None, f"{table.length:.6g} mm", accepted, text))
    if table.output != "slide" and table.pivot is not None and table.arm is not None:
        away = math.hypot(*table.pivot)
        reach = r + link + table.length
        if not abs(away - table.arm) < reach < away + table.arm:
            text = "the output pin cannot be where the tie is at the start, crank_radius + link_length + length from O"
            accepted = f"a pivot and an arm that reach {reach:.6g} mm from the disc axis"
            given = f"from {abs(away - table.arm):.6g} to {away + table.arm:.6g} mm"
            found.problems.append(Problem("tie.pivot", None, given, accepted, text))


KIND = Kind(NAME, TieTable, read)
