"""A chain as the far end: a row of the list, or numbers of one's own, or a row with numbers of one's own put over it."""

from __future__ import annotations

import difflib
import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Annotated, ClassVar, Literal, cast

from pydantic import Field

from parts.catalogue import Catalogue
from parts.design import Assumed
from parts.far_ends.base import PRACTICE, EndForm, FarEnd
from parts.far_ends.reading import Found, Kind, Source
from parts.problems import Problem, written
from parts.schema_values import Length, LengthOrNone, Table, Text, quantity
from parts.trade_names import listed_chain

OWN_CHAIN = ("min_tensile_strength", "pitch", "width_over_pins", "plate_height", "pin_diameter")
_SMALLER = (
    ("pin_diameter", "pitch"),
    ("pin_diameter", "plate_height"),
    ("plate_thickness", "width_over_pins"),
    ("inner_width", "width_over_pins"),
    ("inner_link_width", "width_over_pins"),
)
NAME = "chain"
_OWN_KEYS = (*OWN_CHAIN, "kind", "plate_thickness", "inner_width", "inner_link_width", "lacing", "mass_per_metre")


class ChainTable(Table):
    designation: Text | None = None
    kind: Literal["leaf", "roller"] | None = None
    strands: Annotated[int | None, Field(ge=1, le=3)] = None
    slack: LengthOrNone | None = None
    run_to_spring: LengthOrNone | None = None
    min_tensile_strength: Annotated[float | None, quantity("force", least=1, most=1e9)] = None
    pitch: Length | None = None
    width_over_pins: Length | None = None
    plate_height: Length | None = None
    plate_thickness: Length | None = None
    pin_diameter: Length | None = None
    inner_width: Length | None = None
    inner_link_width: Length | None = None
    lacing: Annotated[list[Annotated[int, Field(ge=1, le=12)]] | None, Field(min_length=2, max_length=2)] = None
    mass_per_metre: Annotated[float | None, quantity("mass_per_length", least=0, most=1e4)] = None


@dataclass(frozen=True, kw_only=True)
class Chain(FarEnd):
    """One chain, listed or of one's own."""

    table: ClassVar[str] = NAME

    kind: Literal["leaf", "roller"]
    strands: int
    pitch: float
    width_over_pins: float
    plate_height: float
    own_pin: float
    tongue_width: float  # room between the plates for the chain end: inner link width, or one slot of a leaf chain
    plate_thickness: float
    lacing: tuple[int, int]  # leaf chain: plates per pitch; roller chain (2, 2)
    strand_pitch: float = 0.0  # roller chain of several strands: from one to the next

    @property
    def plane_width(self) -> float:
        return self.width_over_pins

    @property
    def height(self) -> float:
        return self.plate_height

    @property
    def pin_diameter(self) -> float:
        return self.own_pin

    @property
    def usual_sheave(self) -> tuple[float, str]:
        return 2.5 * self.pitch, f"2.5 chain pitches, {PRACTICE}"

    @property
    def tongues(self) -> bool:
        return self.kind == "roller"

    @property
    def strands_note(self) -> str:
        return f", {self.strands} strands" if self.strands > 1 else ""

    @property
    def grain(self) -> float | None:
        return self.pitch

    def end_form(self) -> EndForm:
        """A tongue in the place of an inner link, or a finger beside each plate of a leaf chain's last link."""
        reach = 0.525 * self.plate_height + 1.0
        if self.kind == "roller":
            tongue = self.tongue_width
            natural = (self.strands - 1) * self.strand_pitch + tongue
            slots = strand_slots(self.strands, self.strand_pitch, tongue)
            why = "fills the room between the chain's outermost plates"
        else:
            plates, tongue = self.lacing[1], math.floor(self.tongue_width * 0.97 * 20.0) / 20.0
            slot = self.plate_thickness * 1.05 + 0.1
            natural = math.ceil(((plates + 1) * tongue + plates * slot) * 2.0 - 1e-9) / 2.0
            slots, why = leaf_slots(plates, tongue, slot), "a finger beside each plate of the chain's last link"
        return EndForm(natural, why, tongue, slots, reach, 0.0, self.pitch, self.plate_height if slots else 0.0)


def leaf_slots(plates: int, finger: float, slot: float) -> tuple[tuple[float, float], ...]:
    """Where the slots for a leaf chain's plates lie, as distances from the block's middle (mm), both sides alike.

    ``plates`` slots with a finger between each two; an odd number has one in the middle.
    """
    rows = [(0.0, slot / 2.0)] if plates % 2 else []
    at = slot / 2.0 + finger if plates % 2 else finger / 2.0
    for _ in range(plates // 2):
        rows.append((at, at + slot))
        at += slot + finger
    return tuple(rows)


def strand_slots(strands: int, pitch: float, tongue: float) -> tuple[tuple[float, float], ...]:
    """Slots between the tongues of a roller chain's strands, as distances from the block's middle (mm)."""
    if strands == 1:
        return ()
    gap = pitch - tongue
    if strands % 2 == 0:
        return ((0.0, gap / 2.0),)
    return ((tongue / 2.0, tongue / 2.0 + gap),)


def read(table: Table, source: Source) -> Found:
    """A listed chain, or one of one's own."""
    assert isinstance(table, ChainTable)
    found, row = Found(), None
    if table.designation is not None:
        listed = find_row(table.designation, table.strands, source.catalogue)
        if isinstance(listed, Problem):
            found.problems.append(listed)
        else:
            row = listed
    found.problems += _problems(table, source.raw, row)
    if row is None and (table.designation is not None or any(getattr(table, key) is None for key in OWN_CHAIN)):
        return found  # said already
    found.far_end, found.assumed = build_chain(table, row)
    return found


def _problems(chain: ChainTable, raw: Mapping[str, object], row: Mapping[str, object] | None) -> Iterator[Problem]:
    """A listed chain, or all of what must be known of one's own; and sizes that can be those of one chain.

    ``row`` is the listed one, whose values stand where the design gives none.
    """
    if "designation" not in raw:
        absent = [key for key in OWN_CHAIN if key not in raw]
        if len(absent) == len(OWN_CHAIN):
            yield Problem("chain.designation", None, "nothing", f"a listed chain, or {', '.join(OWN_CHAIN)}", "missing")
        else:
            for key in absent:
                yield Problem(
                    f"chain.{key}", None, "nothing", f"{key} = …, or the designation of a listed chain", "missing"
                )
    for small, large in _SMALLER:
        if small not in raw and large not in raw:
            continue
        size, bound = (getattr(chain, key) if key in raw else (row or {}).get(key) for key in (small, large))
        if not isinstance(size, (int, float)) or not isinstance(bound, (int, float)) or size < bound:
            continue
        if small in raw:
            found, accepted = f"{size:.6g} mm", f"less than {large}, {bound:.6g} mm"
        else:
            found, accepted = f"{bound:.6g} mm", f"more than {small}, {size:.6g} mm"
        key = small if small in raw else large
        yield Problem(f"chain.{key}", None, found, accepted, "no chain can be like that")


def find_row(designation: str, strands: int | None, catalogue: Catalogue) -> Mapping[str, object] | Problem:
    """The listed row for a designation and a number of strands (``"08B"`` with 2 strands is the row ``08B-2``)."""
    base, dash, tail = designation.rpartition("-")
    stem = base if dash and tail.isdecimal() else designation
    row = catalogue.chains.get(designation)
    if row is not None and (strands is None or strands == row.get("strands", 1)):
        return row
    other = catalogue.chains.get(f"{stem}-{strands or 1}")
    if other is not None and (row is not None or stem == designation):
        return other
    if row is not None:
        listed = [str(catalogue.chains[name].get("strands", 1)) for name in _family(stem, catalogue)]
        return Problem("chain.strands", None, str(strands), f"{' or '.join(listed)} for {stem}", "not listed")
    return Problem("chain.designation", None, written(designation), _listed(designation, catalogue), "not listed")


def build_chain(table: ChainTable, row: Mapping[str, object] | None) -> tuple[Chain, list[Assumed]]:
    """The chain and what was assumed of it. ``row`` is the listed one; without it ``OWN_CHAIN`` must all be given."""
    own: dict[str, object] = {key: value for key in _OWN_KEYS if (value := getattr(table, key)) is not None}
    known = dict(row or {}) | own
    if "inner_width" in own and "inner_link_width" not in own:
        known.pop("inner_link_width", None)
    assumed: list[Assumed] = []

    def assume(key: str, value: float | str, quantity: str, why: str) -> None:
        assumed.append(Assumed(f"chain.{key}", value, quantity, why))

    if "kind" not in known:
        known["kind"] = "roller"
        assume("kind", "roller", "text", "the commoner of the two")
    kind = cast(Literal["leaf", "roller"], known["kind"])
    strands = int(_number(known, "strands") or 1) if row is not None else (table.strands or 1)
    if table.strands is None:
        assume("strands", strands, "count", "as the listed chain has" if row is not None else "one chain, not several")
    if table.slack is None:
        assume("slack", 0.0, "length", "a chain just taut at the start")
    width = _number(known, "width_over_pins") or 0.0
    lacing = _lacing(known)
    if lacing is None:
        lacing = (2, 2)
        if kind == "leaf":
            assume("lacing", "2x2", "text", "the lightest common lacing of a leaf chain")
    thickness = _number(known, "plate_thickness")
    if thickness is None:
        share = 0.7 / sum(lacing) if kind == "leaf" else 0.09 / strands
        thickness = share * width
        assume("plate_thickness", thickness, "length", f"{share:.3g} of the width over the pins, {PRACTICE}")
    tongue = tongue_room(known, kind, thickness if "plate_thickness" in known else None)
    if tongue is None:
        share = 0.35 / strands
        tongue = share * width
        assume(
            "tongue_width",
            tongue,
            "length",
            f"{share:.3g} of the width over the pins, {PRACTICE}; give inner_link_width where it is known",
        )
    elif kind == "roller":
        tongue = _tongue_in(tongue)
    return (
        Chain(
            designation=str(known["designation"]) if row is not None else "own chain",
            kind=kind,
            strands=strands,
            pitch=_number(known, "pitch") or 0.0,
            width_over_pins=width,
            plate_height=_number(known, "plate_height") or 0.0,
            own_pin=_number(known, "pin_diameter") or 0.0,
            min_tensile_strength=_number(known, "min_tensile_strength") or 0.0,
            tongue_width=tongue,
            plate_thickness=thickness,
            lacing=lacing,
            mass_per_metre=_number(known, "mass_per_metre"),
            slack=table.slack or 0.0,
            source=_source(row, own),
            confirmed=bool(row.get("confirmed", False)) if row is not None else True,
            strand_pitch=_number(known, "transverse_pitch") or width / strands,
            run_to_spring=table.run_to_spring,
        ),
        assumed,
    )


def tongue_room(known: Mapping[str, object], kind: str, plate_thickness: float | None) -> float | None:
    """The whole room (mm) along the pin that one tongue of the chain end may fill, None where it is not known.

    In a roller chain the tongue takes the place of an inner link, so the room is the width over that link's plates; in
    a leaf chain each finger takes the place of one plate.
    """
    if kind == "leaf":
        return plate_thickness
    over_inner_link, between_inner_plates = _number(known, "inner_link_width"), _number(known, "inner_width")
    if over_inner_link is not None:
        return over_inner_link
    if between_inner_plates is not None:
        return between_inner_plates + 2 * (plate_thickness or 0.0)
    return None


def _tongue_in(room: float) -> float:
    """A tongue with 5 % play in its room, rounded down to 0.1 mm where that leaves anything."""
    return math.floor(9.5 * room + 1e-9) / 10 or 0.95 * room


def _source(row: Mapping[str, object] | None, own: Mapping[str, object]) -> str:
    if row is None:
        return "the design file"
    source = str(row.get("source", ""))
    memory = [key for key in _keys(row, "from_memory") if key not in own]
    if memory:
        source += f"; {', '.join(memory)} from memory, confirm with the maker"
    return f"{source}; {', '.join(own)} from the design file" if own else source


def _keys(row: Mapping[str, object], name: str) -> list[str]:
    value = row.get(name)
    return [str(key) for key in value] if isinstance(value, (list, tuple)) else []


def _number(row: Mapping[str, object], key: str) -> float | None:
    value = row.get(key)
    return float(value) if isinstance(value, (int, float)) else None


def _lacing(row: Mapping[str, object]) -> tuple[int, int] | None:
    value = row.get("lacing")
    return (int(value[0]), int(value[1])) if isinstance(value, (list, tuple)) and len(value) == 2 else None


def _family(stem: str, catalogue: Catalogue) -> list[str]:
    return [name for name in catalogue.chains if name == stem or name.rpartition("-")[0] == stem]


def _listed(designation: str, catalogue: Catalogue) -> str:
    if same := listed_chain(designation, catalogue.chains):
        return f"{same} (the same by its listed name), or another listed chain"
    by_upper = {name.upper(): name for name in catalogue.chains}
    near = [by_upper[name] for name in difflib.get_close_matches(designation.upper(), by_upper, n=4, cutoff=0.5)]
    if near:
        return f"a listed chain; the nearest are {', '.join(near)}"
    return f"a listed chain, such as {', '.join(sorted(catalogue.chains)[:: max(1, len(catalogue.chains) // 6)])}"


KIND = Kind(NAME, ChainTable, read)
