"""Every kind of far end that a design may have; a new one is a file and a line."""

from __future__ import annotations

from collections.abc import Mapping

from parts.far_ends import chain, rope, tie, webbing
from parts.far_ends.reading import Kind

KINDS: Mapping[str, Kind] = {kind.name: kind for kind in (chain.KIND, rope.KIND, webbing.KIND, tie.KIND)}
