"""What the design leaves open and something settles: one list, of which the bill tells."""

from __future__ import annotations

from parts.catalogue import Catalogue
from parts.design import Assumed, Material


class Ledger:
    """Collects what was assumed while sizes, or a release, are settled."""

    def __init__(self) -> None:
        self.rows: list[Assumed] = []

    def take(self, key: str, given: float | None, value: float, why: str, quantity: str = "length") -> float:
        """The given value, or the proportioned one with a line that says so."""
        if given is not None:
            return given
        self.rows.append(Assumed(key, value, quantity, why))
        return value

    def material(self, key: str, given: Material | None, name: str, catalogue: Catalogue) -> Material:
        if given is not None:
            return given
        self.rows.append(Assumed(key, name, "text", "grade in common use for such parts; common practice, no source"))
        return catalogue.materials[name]
