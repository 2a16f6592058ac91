"""The listed chains, materials, ropes and bearings, read from their tables once."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from typing import Any

from parts.catalogue import Catalogue, Rope, RopeEnd, Webbing
from parts.design import Material


@lru_cache(maxsize=1)
def load_catalogue() -> Catalogue:
    """Every listed chain by its designation, and by its other name where it has one; every material by its name."""
    rows = _table("chains.toml")["chain"]
    named = {row["also"]: row for row in rows if "also" in row}
    materials = _table("materials.toml")
    return Catalogue(
        chains={row["designation"]: row for row in rows} | named,
        materials={name: _material(name, row) for name, row in materials.items() if isinstance(row, dict)},
        ropes={rope.designation: rope for rope in ropes()},
        rope_ends={end.name: end for end in rope_ends()},
        webbings={f"{sling.width:g}": sling for sling in webbings()},
        sheave_ratio_of_webbing=float(_table("ropes.toml")["webbing"]["least_sheave_ratio"]),
    )


@dataclass(frozen=True, slots=True)
class Bearing:
    """A deep groove ball bearing: mm, N; ``static_rating`` is C0 of ISO 76."""

    designation: str
    bore: float
    outer_diameter: float
    width: float
    dynamic_rating: float
    static_rating: float
    source: str
    confirmed: bool


G = 9.80665  # m/s²


def rope_breaking_force(k: float, d: float, r_r: float) -> float:
    """Least breaking force (N) of a stranded wire rope.

    ``k``: breaking force factor K of the construction; ``d``: nominal diameter, mm, 6 to 60; ``r_r``: rope grade R_r, MPa.
    Source: EN 12385-4 (and ISO 2408), F_min = K d² R_r / 1000 kN.

    >>> round(rope_breaking_force(0.332, 10.0, 1770.0))
    58764
    """
    return k * d**2 * r_r


def rope_mass(w: float, d: float) -> float:
    """Mass (kg/m) of a wire rope. ``w``: length mass factor W; ``d``: mm. Source: EN 12385-4, M = W d² kg/100 m.

    >>> round(rope_mass(0.345, 10.0), 3)
    0.345
    """
    return w * d**2 / 100.0


@lru_cache(maxsize=1)
def ropes() -> tuple[Rope, ...]:
    """Every listed wire rope, by construction and diameter."""
    rows = []
    for row in _table("ropes.toml")["construction"]:
        for d in map(float, row["diameters"]):
            k, w = float(row["breaking_factor"]), float(row["mass_factor"])
            rows.append(
                Rope(
                    str(row["name"]), d, rope_breaking_force(k, d, 1770.0), rope_breaking_force(k, d, 1960.0),
                    rope_mass(w, d), float(row["least_sheave_ratio"]), str(row["source"]), bool(row["confirmed"]),
                    tuple(map(str, row.get("from_memory", ()))),
                )
            )  # fmt: skip
    return tuple(rows)


@lru_cache(maxsize=1)
def rope_ends() -> tuple[RopeEnd, ...]:
    return tuple(
        RopeEnd(
            name=str(row["name"]),
            efficiency=float(row["efficiency"]),
            width=float(row["width"]),
            height=float(row["height"]),
            pin=float(row["pin"]),
            source=str(row["source"]),
            confirmed=bool(row["confirmed"]),
        )
        for row in _table("ropes.toml")["end"]
    )


@lru_cache(maxsize=1)
def webbings() -> tuple[Webbing, ...]:
    """Flat woven slings; the least breaking force is the working load by the standard's factor."""
    row = _table("ropes.toml")["webbing"]
    thickness, factor = float(row["thickness"]), float(row["factor"]) * G
    return tuple(
        Webbing(float(w), thickness, float(m), factor * float(m), str(row["source"]), bool(row["confirmed"]))
        for w, m in zip(row["widths"], row["working_loads"], strict=True)
    )


@lru_cache(maxsize=1)
def bearings() -> tuple[Bearing, ...]:
    """Every listed deep groove ball bearing, by series and bore."""
    return tuple(
        Bearing(
            str(name), float(bore), float(outer), float(width), float(c), float(c0),
            str(row["source"]), bool(row["confirmed"]),
        )
        for row in _table("bearings.toml")["series"]
        for name, bore, outer, width, c, c0 in row["rows"]
    )  # fmt: skip


def chain_rows() -> tuple[dict[str, Any], ...]:
    """Every listed chain as it stands in its table."""
    return tuple(_table("chains.toml")["chain"])


@lru_cache(maxsize=4)
def _table(name: str) -> dict[str, Any]:
    return tomllib.loads((files("loads") / "data" / name).read_text(encoding="utf-8"))


def _material(name: str, row: dict[str, Any]) -> Material:
    return Material(
        name=name,
        kind=str(row["kind"]),
        youngs_modulus=float(row["youngs_modulus"]),
        poissons_ratio=float(row["poissons_ratio"]),
        density=float(row["density"]),
        yields=_steps(row["yield"]),
        ultimates=_steps(row["ultimate"]),
        source=str(row["source"]),
        confirmed=bool(row["confirmed"]),
    )


def _steps(rows: list[list[float]]) -> tuple[tuple[float, float], ...]:
    """Rows of (largest size in mm, MPa), smallest size first."""
    return tuple(sorted((float(size), float(strength)) for size, strength in rows))
