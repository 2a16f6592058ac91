"""What of a design nobody has looked up yet and certificates have to confirm."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields, is_dataclass

from loads.examine import Examination
from parts import hardware
from parts.design import Material
from parts.fits import classes_of, fit_classes
from parts.making import spacer_material, spacer_source, stock_source
from parts.outline import Plate

MEMORY = "from memory"


def from_memory(e: Examination) -> list[str]:
    """Chain, materials, hardware, fits, stock sizes, and other sources of checks; each once, with where it is from."""
    found = [*_chain(e), *_materials(e), *_hardware(e), *_fits(e), *_stock(e), *_checks(e)]
    return list(dict.fromkeys(found))


def _chain(e: Examination) -> Iterator[str]:
    far = e.design.far_end
    if not far.confirmed or MEMORY in far.source:
        yield f"{far.noun} {far.designation}: {far.source}"


def _materials(e: Examination) -> Iterator[str]:
    for m in materials_of(e.sizes):
        if not m.confirmed:
            yield f"material {m.name}: {m.source}"


def materials_of(sizes: object) -> Iterator[Material]:
    """Every material in a record of sizes and in the records within it."""
    if isinstance(sizes, Material):
        yield sizes
    elif is_dataclass(sizes):
        for field in fields(sizes):
            yield from materials_of(getattr(sizes, field.name))


def _hardware(e: Examination) -> Iterator[str]:
    disc, stop = e.sizes.disc, e.sizes.stop
    rows = [("cap_screw", disc.bolt_thread)]
    if stop.style == "block":
        rows += [("cap_screw", stop.bolt_thread), ("dowel", f"{stop.dowel_diameter:g}")]
    if e.stack.chain_pin_support == "cantilever":
        rows.append(("retaining_ring", f"{e.sizes.chain_pin.middle_diameter:g}"))
    for kind, size in rows:
        text = hardware.from_memory(kind, size)
        if text:
            yield f"{kind.replace('_', ' ')} {size}: {text}"


def _fits(e: Examination) -> Iterator[str]:
    names = [hole.fit for part in e.parts if isinstance(part.body, Plate) for hole in part.body.holes if hole.fit]
    for field in fields(e.sizes.fits):
        names += classes_of(getattr(e.sizes.fits, field.name))
    listed = fit_classes()
    for name in names:
        if name in listed and not listed[name].confirmed:
            yield f"limits {name}: {listed[name].source}"


def _stock(e: Examination) -> Iterator[str]:
    if text := stock_source():
        yield f"stock sizes: {text}"
    name, _ = spacer_material()
    if any(part.material == name for part in e.parts) and (text := spacer_source()):
        yield f"material {name}: {text}"


def _checks(e: Examination) -> Iterator[str]:
    for row in e.checks:
        if MEMORY in row.source and not row.source.startswith(e.design.far_end.source):
            yield f"{row.part}, {row.check}: {row.source}"
