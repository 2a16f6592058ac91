"""The listed chains and materials, read from their tables once."""

from __future__ import annotations

import tomllib
from functools import lru_cache
from importlib.resources import files
from typing import Any

from parts.catalogue import Catalogue
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
    )


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
