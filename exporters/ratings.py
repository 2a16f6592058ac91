"""What ``ratings`` lists: chains, ropes, materials, fits and bearings, with what is from memory marked.

A value carries its mark itself: ``*`` from memory, ``~`` worked out here. Metric throughout, as the standards print them.
"""

from __future__ import annotations

import difflib
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import Any, NamedTuple

from loads import catalogue
from parts.fits import fit_classes

MEMORY, ESTIMATED = "*", "~"
LEGEND = {
    MEMORY: "from memory, confirm with the maker's certificate",
    ESTIMATED: "worked out here from the sizes, not the maker's figure",
}
WIDTH = 80
_ALL = "all"  # in the marks of a row: every value but its name


class Column(NamedTuple):
    """``key`` names the value in JSON with its unit; ``head`` is what people see; ``show`` makes it text."""

    key: str
    head: str
    show: Callable[[Any], str] = str
    left: bool = False


@dataclass(frozen=True, slots=True)
class Row:
    """Values by column key; ``marks`` gives the keys that are not read in the source, with their mark."""

    name: str
    words: str  # what --like looks in
    values: dict[str, Any]
    source: str
    confirmed: bool
    marks: dict[str, str]

    def mark(self, key: str) -> str:
        return self.marks.get(key) or self.marks.get(_ALL, "")


@dataclass(frozen=True, slots=True)
class Section:
    """One table: its name in JSON, its heading, its columns behind the name, its rows."""

    key: str
    title: str
    columns: tuple[Column, ...]
    rows: tuple[Row, ...]


def _plain(value: float) -> str:
    return f"{value:g}"


def _kilo(value: float) -> str:
    return f"{value / 1000.0:.4g}"


def _two(value: float) -> str:
    return f"{value:.2f}"


def _range(steps: Sequence[Sequence[float]]) -> str:
    first, last = steps[0][1], steps[-1][1]
    return f"{first:g}" if first == last else f"{first:g}–{last:g}"


def _all_if(unseen: bool) -> dict[str, str]:
    return {_ALL: MEMORY} if unseen else {}


def _only(keys: Iterable[str], unseen: bool) -> dict[str, str]:
    return dict.fromkeys(keys, MEMORY) if unseen else {}


# ------------------------------------------------------------------------------------------------------ sections


_CHAIN = (
    Column("also", "also", left=True),
    Column("kind", "kind", left=True),
    Column("pitch_mm", "pitch", _two),
    Column("pin_diameter_mm", "pin", _two),
    Column("plate_height_mm", "height", _plain),
    Column("width_over_pins_mm", "width", _plain),
    Column("mass_per_metre_kg", "kg/m", _two),
    Column("min_tensile_strength_N", "kN", _kilo),
)
_CHAIN_MORE = ("plate_thickness", "inner_width", "inner_link_width", "transverse_pitch", "roller_diameter")


def _chain(row: dict[str, Any]) -> Row:
    values: dict[str, Any] = {"also": row.get("also", ""), "kind": row["kind"]}
    unit = {"min_tensile_strength": "_N", "mass_per_metre": "_kg"}
    names = ("pitch", "pin_diameter", "plate_height", "width_over_pins", "mass_per_metre", "min_tensile_strength")
    marks = {}
    for name in (*names, *_CHAIN_MORE):
        if name in row:
            key = name + unit.get(name, "_mm")
            values[key] = row[name]
            if name in row.get("from_memory", ()):
                marks[key] = MEMORY
            elif name in row.get("estimated", ()):
                marks[key] = ESTIMATED
    for name in ("strands", "lacing"):
        if name in row:
            values[name] = row[name]
    words = f"{row['designation']} {row.get('also', '')} {row['kind']}"
    return Row(row["designation"], words, values, row["source"], bool(row["confirmed"]), marks)


def _chains() -> list[Section]:
    title = "Chains: mm, least tensile strength of the whole chain"
    return [Section("chains", title, _CHAIN, tuple(map(_chain, catalogue.chain_rows())))]


_MATERIAL = (
    Column("kind", "kind", left=True),
    Column("largest_size_mm", "up to", _plain),
    Column("yield_MPa", "yield", _range),
    Column("ultimate_MPa", "ultimate", _range),
)


def _materials() -> list[Section]:
    rows = []
    for m in catalogue.load_catalogue().materials.values():
        values = {
            "kind": m.kind, "largest_size_mm": m.yields[-1][0], "yield_MPa": [list(step) for step in m.yields],
            "ultimate_MPa": [list(step) for step in m.ultimates], "youngs_modulus_MPa": m.youngs_modulus,
            "poissons_ratio": m.poissons_ratio, "density_kg_m3": m.density,
        }  # fmt: skip
        marks = _only(("youngs_modulus_MPa", "poissons_ratio", "density_kg_m3"), True)
        marks |= _only(("largest_size_mm", "yield_MPa", "ultimate_MPa"), not m.confirmed)
        rows.append(Row(m.name, f"{m.name} {m.kind}", values, m.source, m.confirmed, marks))
    title = "Materials: size in mm, least strengths in MPa, of the smallest to the largest"
    return [Section("materials", title, _MATERIAL, tuple(rows))]


_ROPE = (
    Column("diameter_mm", "mm", _plain),
    Column("breaking_force_1770_N", "kN, grade 1770", _kilo),
    Column("breaking_force_1960_N", "kN, grade 1960", _kilo),
    Column("mass_per_metre_kg", "kg/m", _two),
    Column("least_sheave_ratio", "sheave over rope", _plain),
)
_WEBBING = (
    Column("width_mm", "mm", _plain),
    Column("working_load_kg", "working load kg", _plain),
    Column("breaking_force_N", "kN", _kilo),
)
_FORCES = ("breaking_force_1770_N", "breaking_force_1960_N", "mass_per_metre_kg", "least_sheave_ratio")
_END = (Column("efficiency", "share of the rope's force", _two),)


def _ropes() -> list[Section]:
    ropes = tuple(
        Row(
            r.designation, f"wire rope {r.construction} {r.diameter:g}",
            {"diameter_mm": r.diameter, "breaking_force_1770_N": round(r.breaking_force_1770, 3),
             "breaking_force_1960_N": round(r.breaking_force_1960, 3), "mass_per_metre_kg": round(r.mass_per_metre, 6),
             "least_sheave_ratio": r.least_sheave_ratio},
            r.source, r.confirmed, _only(_FORCES, not r.confirmed) | dict.fromkeys(r.from_memory, MEMORY),
        )
        for r in catalogue.ropes()
    )  # fmt: skip
    webbing = tuple(
        Row(
            w.designation, w.designation,
            {"width_mm": w.width, "working_load_kg": w.working_load, "breaking_force_N": round(w.breaking_force, 3)},
            w.source, w.confirmed, _all_if(not w.confirmed),
        )
        for w in catalogue.webbings()
    )  # fmt: skip
    ends = tuple(
        Row(x.name, f"rope end {x.name}", {"efficiency": x.efficiency}, x.source, x.confirmed, _all_if(not x.confirmed))
        for x in catalogue.rope_ends()
    )
    return [
        Section("ropes", "Wire ropes: least breaking force", _ROPE, ropes),
        Section("webbing", "Webbing: least breaking force", _WEBBING, webbing),
        Section("rope_ends", "Rope ends", _END, ends),
    ]


_FIT = (
    Column("over_mm", "over mm", _plain),
    Column("up_to_mm", "up to mm", _plain),
    Column("lower_um", "lower µm", _plain),
    Column("upper_um", "upper µm", _plain),
)


def _fits() -> list[Section]:
    rows = []
    for name, fit in fit_classes().items():
        what = "hole" if name[0].isupper() else "shaft"
        for over, up_to, lower, upper in fit.rows:
            values = {"over_mm": over, "up_to_mm": up_to, "lower_um": lower, "upper_um": upper}
            rows.append(Row(name, f"{name} {what}", values, fit.source, fit.confirmed, _all_if(not fit.confirmed)))
    return [Section("fits", "Fits: limits of size, ISO 286-2", _FIT, tuple(rows))]


_BEARING = (
    Column("bore_mm", "bore", _plain),
    Column("outer_diameter_mm", "outside", _plain),
    Column("width_mm", "width", _plain),
    Column("dynamic_rating_N", "C kN", _kilo),
    Column("static_rating_N", "C0 kN", _kilo),
)


def _bearings() -> list[Section]:
    rows = tuple(
        Row(
            b.designation, f"{b.designation} deep groove ball bearing",
            {"bore_mm": b.bore, "outer_diameter_mm": b.outer_diameter, "width_mm": b.width,
             "dynamic_rating_N": b.dynamic_rating, "static_rating_N": b.static_rating},
            b.source, b.confirmed, _all_if(not b.confirmed),
        )
        for b in catalogue.bearings()
    )  # fmt: skip
    return [Section("bearings", "Deep groove ball bearings: mm, ratings of ISO 281 and ISO 76", _BEARING, rows)]


TABLES: dict[str, Callable[[], list[Section]]] = {
    "chains": _chains,
    "ropes": _ropes,
    "materials": _materials,
    "fits": _fits,
    "bearings": _bearings,
}


# ----------------------------------------------------------------------------------------------- choice and output


def sections(names: Iterable[str], like: str = "") -> list[Section]:
    """The tables asked for, with the rows that have every word of ``like`` in their name, other name or kind."""
    wanted = like.lower().split()
    found = []
    for name in names:
        for s in TABLES[name]():
            rows = tuple(r for r in s.rows if all(word in r.words.lower() for word in wanted))
            if rows:
                found.append(Section(s.key, s.title, s.columns, rows))
    return found


def nearest(names: Iterable[str], like: str) -> list[str]:
    """Names in the tables that ``like`` may have been meant for."""
    known = {r.name.lower(): r.name for name in names for s in TABLES[name]() for r in s.rows}
    return [known[name] for name in difflib.get_close_matches(like.lower(), known, n=4, cutoff=0.5)]


def overview() -> list[str]:
    """One line a table: how many rows, and how many of them hold values from memory."""
    lines = [f"{'table':<11}{'rows':>6}  with strengths, limits or ratings from memory"]
    for name, make in TABLES.items():
        rows = [r for s in make() for r in s.rows]
        lines.append(f"{name:<11}{len(rows):>6}  {sum(not r.confirmed for r in rows)}")
    return lines


def document(found: Iterable[Section]) -> dict[str, list[dict[str, Any]]]:
    """The rows for programs: SI with the unit in each name, source, and which values are from memory or worked out."""
    return {s.key: [_record(r) for r in s.rows] for s in found}


def _record(row: Row) -> dict[str, Any]:
    keys = list(row.values)
    return {
        "name": row.name, **row.values, "source": row.source, "confirmed": row.confirmed,
        "from_memory": [k for k in keys if row.mark(k) == MEMORY],
        "estimated": [k for k in keys if row.mark(k) == ESTIMATED],
    }  # fmt: skip


def lines(found: Sequence[Section]) -> list[str]:
    """The tables as plain text of at most 80 columns, marks explained below; a single row comes with all it has."""
    out: list[str] = []
    for s in found:
        out += [s.title, *_table(s), ""]
    used = {mark for s in found for r in s.rows for c in s.columns if (mark := r.mark(c.key))}
    if sum(len(s.rows) for s in found) == 1:
        row = found[0].rows[0]
        shown = {c.key for c in found[0].columns}
        more = {k: v for k, v in row.values.items() if k not in shown}
        more |= {k: v for k, v in row.values.items() if k in shown and isinstance(v, list)}
        for key, value in more.items():
            out += _wrapped(f"{key}: {_written(value)}{row.mark(key)}")
        out += _wrapped(f"source: {row.source}")
        used |= {mark for k in row.values if (mark := row.mark(k))}
    out += [f"{mark} {LEGEND[mark]}" for mark in (MEMORY, ESTIMATED) if mark in used]
    if not used:
        out.append("Every value was read in a published table; --json names it.")
    return out


def _written(value: Any) -> str:
    if isinstance(value, list) and value and isinstance(value[0], list):
        return ", ".join(f"{strength:g} up to {size:g} mm" for size, strength in value)
    if isinstance(value, list):
        return " x ".join(map(str, value))
    return f"{value:g}" if isinstance(value, float) else str(value)


def _wrapped(text: str) -> list[str]:
    from textwrap import wrap

    return wrap(text, WIDTH, initial_indent="  ", subsequent_indent="    ")


def _table(s: Section) -> list[str]:
    # a column for the mark goes with each number, so that figures stand under each other
    heads = ["", *(c.head for c in s.columns)]
    cells = [heads]
    for r in s.rows:
        cells.append([r.name, *(_cell(r, c) for c in s.columns)])
    widths = [max(len(row[i].rstrip()) for row in cells) for i in range(len(heads))]
    lefts = [True, *(c.left for c in s.columns)]
    text = []
    for row in cells:
        parts = [
            f"{cell.rstrip():<{w}}" if left else f"{cell.rstrip(MEMORY + ESTIMATED):>{w}}{_mark_of(cell)}"
            for cell, w, left in zip(row, widths, lefts, strict=True)
        ]
        text.append(("  " + " ".join(parts)).rstrip())
    return text


def _mark_of(cell: str) -> str:
    return cell[-1] if cell[-1:] in (MEMORY, ESTIMATED) else " "


def _cell(row: Row, column: Column) -> str:
    value = row.values.get(column.key)
    if value is None or value == "":
        return ""
    return column.show(value) + ("" if column.left else row.mark(column.key))
