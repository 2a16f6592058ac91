"""Sizes that the design leaves open, by trade proportion from the loads.

Each is the smallest preferred size at which the check's own formula reaches its target, so proportion and check cannot
disagree. A size that the design gives is taken as it is; where no preferred size is enough the largest is taken and the
check says what falls short.
"""

from __future__ import annotations

from collections.abc import Mapping

from loads.members import History
from loads.proportions.basis import SPIGOT, Pair
from loads.proportions.drive import DriveSide
from loads.proportions.endurance import Settled, raised_for_life
from loads.proportions.links import LinkSide
from loads.proportions.locking import LockSide
from parts.catalogue import Catalogue
from parts.design import Assumed, Design
from parts.sizes import LinkSizes, Sizes, StopSizes
from parts.stack import Stack

__all__ = ["SPIGOT", "proportion"]

WIDE_OF_BORE = 1.6
MOST_TRIES = 6  # plates that are tried for the stop's sake


class _Proportioner(LinkSide, DriveSide, LockSide):
    """Settles one design's sizes, in the order in which one needs another."""

    def settle(self) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
        form = self._end_form()
        width = form.width
        pair, link, bore, stop = self._link_and_stop(width)
        crank = self._crank_pin(pair)
        chain_pin = self._chain_pin(pair)
        end = self._chain_end(pair, chain_pin, form)
        disc = self._disc(pair, link, stop, width, bore)
        stack = self.stack(width, link.thickness, disc.thickness)
        fits = self._fits(crank.diameter, chain_pin.diameter, stop, stack)
        running = self._running(disc, link, crank, chain_pin, fits, stack)
        lock = self._lock_pin(disc, pair.crank, link, stop)
        sizes = Sizes(self.gap, disc, link, stop, crank, chain_pin, end, fits, running, lock)
        return sizes, stack, tuple(self.ledger.rows)

    def _link_and_stop(self, end_width: float) -> tuple[Pair, LinkSizes, float, StopSizes]:
        """Link, pins, bore and stop. Where the block that the stop takes is too long for the flank, thicker plates are
        tried, at which a post or a shorter block is enough; if none is, the first choice stands and the check says so.
        """
        m, wish = self.design.mechanism, self.design
        room = 2.0 * min(m.stop_reach, m.link_length - m.stop_reach)
        left_open = wish.link.thickness is None and wish.stop.style is None
        mark, least, tries = len(self.ledger.rows), 0.0, []
        for _ in range(MOST_TRIES if left_open else 1):
            del self.ledger.rows[mark:]
            pair = self._link_and_pins(end_width, least)
            link = self._link(pair)
            bore = self._bore_for(link, pair, end_width)
            stop = self._stop(link, bore)
            tries.append((pair, link, bore, stop, self.ledger.rows[mark:]))
            if stop.style == "post" or stop.length <= room:
                break
            thicker = self.plates[self.plates > pair.thickness + 1e-9]
            if not thicker.size:
                break
            least = float(thicker[0])
            self.least_width = WIDE_OF_BORE * bore + 6.0  # and a wider link, so that a post clears the bore
        good = [row for row in tries if row[3].style == "post" or row[3].length <= room]
        pair, link, bore, stop, rows = good[0] if good else tries[0]
        self.ledger.rows[mark:] = rows
        return pair, link, bore, stop


def proportion(design: Design, past: History, catalogue: Catalogue) -> tuple[Sizes, Stack, tuple[Assumed, ...]]:
    """All sizes of a design, its stack, and what was assumed on the way; large enough for the shots that it asks for."""

    def settle(floors: Mapping[str, float]) -> Settled:
        return _Proportioner(design, past, catalogue, floors).settle()

    return raised_for_life(design, past, settle)
