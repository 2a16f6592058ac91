"""Sizes that the design leaves open, by trade proportion from the loads.

Each is the smallest preferred size at which the check's own formula reaches its target, so proportion and check cannot
disagree. A size that the design gives is taken as it is; where no preferred size is enough the largest is taken and the
check says what falls short.
"""

from __future__ import annotations

from loads.members import History
from loads.proportions.basis import SPIGOT
from loads.proportions.drive import DriveSide
from loads.proportions.links import LinkSide
from parts.catalogue import Catalogue
from parts.design import Assumed, Design
from parts.sizes import Sizes
from parts.stack import Stack

__all__ = ["SPIGOT", "proportion"]


class _Proportioner(LinkSide, DriveSide):
    """Settles one design's sizes, in the order in which one needs another."""

    def settle(self) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
        width, tongue, slots = self._end_width()
        pair = self._link_and_pins(width)
        link = self._link(pair)
        bore = self._bore_for(link, pair, width)
        stop = self._stop(link, bore)
        crank = self._crank_pin(pair)
        chain_pin = self._chain_pin(pair)
        end = self._chain_end(pair, chain_pin, width, tongue, slots)
        disc = self._disc(pair, link, stop, width, bore)
        stack = self.stack(width, link.thickness, disc.thickness)
        fits = self._fits(crank.diameter, chain_pin.diameter, stop, stack)
        running = self._running(disc, link, crank, chain_pin, fits, stack)
        sizes = Sizes(self.gap, disc, link, stop, crank, chain_pin, end, fits, running)
        return sizes, stack, tuple(self.ledger.rows)


def proportion(design: Design, past: History, catalogue: Catalogue) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
    """All sizes of a design, its stack, and what was assumed on the way."""
    return _Proportioner(design, past, catalogue).settle()
