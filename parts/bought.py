"""What is bought, for the parts list."""

from __future__ import annotations

from dataclasses import dataclass

from parts.crank_disc import HEAD_BELOW
from parts.design import Design
from parts.hardware import cap_screw
from parts.quantities import show
from parts.sizes import Sizes
from parts.stack import Stack


@dataclass(frozen=True, slots=True)
class Bought:
    key: str
    title: str
    quantity: int
    note: str


def bought(design: Design, sizes: Sizes, stack: Stack) -> list[Bought]:
    """Everything the machine needs that is not one of its made parts. Notes are in the design's units."""
    sides, disc, stop, chain = len(stack.sides), sizes.disc, sizes.stop, design.chain
    units = design.identity.units

    def size(value: float) -> str:
        return show(value, "length", units)

    strands = f", {chain.strands} strands" if chain.strands > 1 else ""
    slack = f"{size(chain.slack)} longer than taut" if chain.slack else "taut"
    rows = [
        Bought("chain", "Chain", 1, f"{chain.designation}{strands}; cut to be {slack} at the start dead centre"),
        Bought(
            "chain_connecting_pin", "Connecting pin of the chain", 1,
            f"the chain's own, diameter {size(sizes.chain_end.pin_diameter)}, locked; joins chain and chain end",
        ),
        Bought("hub_bolt", "Hub bolt", disc.bolt_count * sides, f"ISO 4762 {disc.bolt_thread}, head flush in the disc"),
    ]  # fmt: skip
    if stop.style == "block":
        rows += [
            Bought(
                "stop_dowel",
                "Dowel of the stop block",
                2 * sides,
                f"ISO 8734, diameter {stop.dowel_diameter:g} mm; {disc.thickness + 0.8 * stop.height:.0f} mm long or less",
            ),
            Bought(
                "stop_bolt",
                "Bolt of the stop block",
                2 * sides,
                f"ISO 4762 {stop.bolt_thread}, from the disc's back, head flush; {_reach(sizes):.0f} mm long or less",
            ),
        ]
    if stack.chain_pin_support == "cantilever":
        standard = "DIN 471" if units == "metric" else "external, inch series"
        ring = f"{standard}, for a shaft of {size(sizes.chain_pin.middle_diameter)}"
        rows.append(Bought("retaining_ring", "Retaining ring of the chain pin", 1, ring))
    return [
        *rows,
        Bought(
            "sheave",
            "Sheave",
            1,
            f"pitch radius {size(design.sheave.pitch_radius)}, for {chain.designation}, on its own pin",
        ),
        Bought("spring", "Spring", 1, _spring(design)),
        Bought(
            "hub",
            "Hub and shaft",
            sides,
            f"to fit a bore of {size(disc.bore)}; nothing proud of the disc's chain face",
        ),
        Bought("motor", "Motor and drive", 1, "for the torque in the bill of loads; turns one way only"),
    ]


def _reach(sizes: Sizes) -> float:
    """From under a stop bolt's head to just below the block's top, mm."""
    screw = cap_screw(sizes.stop.bolt_thread)
    return sizes.disc.thickness - screw.head_height - HEAD_BELOW + 0.9 * sizes.stop.height


def _spring(design: Design) -> str:
    spring, units = design.spring, design.identity.units
    if spring.table is not None:
        force, draw = (
            show(float(spring.table[1, -1]), "force", units),
            show(float(spring.table[0, -1]), "length", units),
        )
        return f"force {force} at a draw of {draw}; see the design's table"
    return f"preload {show(spring.preload, 'force', units)}, rate {show(spring.rate, 'rate', units)}"
