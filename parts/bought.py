"""What is bought, for the parts list."""

from __future__ import annotations

from dataclasses import dataclass

from parts.design import Design
from parts.sizes import Sizes
from parts.stack import Stack


@dataclass(frozen=True, slots=True)
class Bought:
    key: str
    title: str
    quantity: int
    note: str


def bought(design: Design, sizes: Sizes, stack: Stack) -> list[Bought]:
    """Everything the machine needs that is not one of its made parts. Notes carry sizes in mm."""
    sides, disc, stop, chain = len(stack.sides), sizes.disc, sizes.stop, design.chain
    strands = f", {chain.strands} strands" if chain.strands > 1 else ""
    slack = f"{chain.slack:g} mm longer than taut" if chain.slack else "taut"
    rows = [
        Bought("chain", "Chain", 1, f"{chain.designation}{strands}; cut to be {slack} at the start dead centre"),
        Bought(
            "chain_connecting_pin", "Connecting pin of the chain", 1,
            f"the chain's own, diameter {sizes.chain_end.pin_diameter:g} mm, locked; joins chain and chain end",
        ),
        Bought("hub_bolt", "Hub bolt", disc.bolt_count * sides, f"ISO 4762 {disc.bolt_thread}, head flush in the disc"),
    ]  # fmt: skip
    if stop.style == "block":
        rows += [
            Bought(
                "stop_dowel",
                "Dowel of the stop block",
                2 * sides,
                f"ISO 8734, diameter {stop.dowel_diameter:g} mm",
            ),
            Bought(
                "stop_bolt",
                "Bolt of the stop block",
                2 * sides,
                f"ISO 4762 {stop.bolt_thread}, from the disc's back",
            ),
        ]
    if stack.chain_pin_support == "cantilever":
        ring = f"DIN 471, for a shaft of {sizes.chain_pin.middle_diameter:g} mm"
        rows.append(Bought("retaining_ring", "Retaining ring of the chain pin", 1, ring))
    return [
        *rows,
        Bought(
            "sheave",
            "Sheave",
            1,
            f"pitch radius {design.sheave.pitch_radius:g} mm, for {chain.designation}, on its own pin",
        ),
        Bought("spring", "Spring", 1, _spring(design)),
        Bought(
            "hub",
            "Hub and shaft",
            sides,
            f"to fit a bore of {disc.bore:g} mm; nothing proud of the disc's chain face",
        ),
        Bought("motor", "Motor and drive", 1, "for the torque in the bill of loads; turns one way only"),
    ]


def _spring(design: Design) -> str:
    spring = design.spring
    if spring.table is not None:
        return f"force {spring.table[1, -1]:g} N at a draw of {spring.table[0, -1]:g} mm; see the design's table"
    return f"preload {spring.preload:g} N, rate {spring.rate:g} N/mm"
