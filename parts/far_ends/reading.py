"""What a kind of far end is given to read its table, and what it gives back."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from parts.catalogue import Catalogue
from parts.design import Assumed, ChainEndWish, Material
from parts.far_ends.base import FarEnd
from parts.problems import Problem
from parts.schema_values import Table


@dataclass(frozen=True)
class Source:
    """The table as it is written and as it was read (None for what was refused), and what may be looked up."""

    raw: Mapping[str, object]
    catalogue: Catalogue
    material: Callable[[str, str], Material | None]  # of a table's key; notes it where it is not listed
    crank_radius: float | None = None
    link_length: float | None = None


@dataclass
class Found:
    """A far end, or what is wrong with its table. ``end`` is what the table says of the plate on the chain pin."""

    far_end: FarEnd | None = None
    problems: list[Problem] = field(default_factory=list)
    assumed: list[Assumed] = field(default_factory=list)
    end: ChainEndWish | None = None

    def assume(self, key: str, value: float | str, quantity: str, why: str) -> None:
        self.assumed.append(Assumed(key, value, quantity, why))


@dataclass(frozen=True)
class Kind:
    """A kind of far end: its table in the design file, and how that is read."""

    name: str
    table: type[Table]
    read: Callable[[Table, Source], Found]
