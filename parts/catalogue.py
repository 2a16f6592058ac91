"""The listed chains and materials that a design may name; the tables themselves are the next room's."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from parts.design import Material


@dataclass(frozen=True, slots=True)
class Catalogue:
    """``chains``: designation to the row of the table, lengths in mm, strengths in N, masses a metre in kg."""

    chains: Mapping[str, Mapping[str, object]]
    materials: Mapping[str, Material]
