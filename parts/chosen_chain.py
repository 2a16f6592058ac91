"""The chain of a design: a row of the list, or numbers of one's own, or a row with numbers of one's own put over it."""

from __future__ import annotations

import difflib
import math
from collections.abc import Mapping
from typing import Literal, cast

from parts.catalogue import Catalogue
from parts.design import Assumed, Chain
from parts.plausible import OWN_CHAIN
from parts.problems import Problem, written
from parts.schema import ChainTable

_OWN_KEYS = (*OWN_CHAIN, "kind", "plate_thickness", "inner_width", "inner_link_width", "lacing", "mass_per_metre")
PRACTICE = "common practice, no source"


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
            pin_diameter=_number(known, "pin_diameter") or 0.0,
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
    by_upper = {name.upper(): name for name in catalogue.chains}
    near = [by_upper[name] for name in difflib.get_close_matches(designation.upper(), by_upper, n=4, cutoff=0.5)]
    if near:
        return f"a listed chain; the nearest are {', '.join(near)}"
    return f"a listed chain, such as {', '.join(sorted(catalogue.chains)[:: max(1, len(catalogue.chains) // 6)])}"
