"""The lock pin: put through a bush of the frame into the disc from behind, at the start or at the hold.

It is a loose part that is in the machine only while nothing turns. Its frame has z = 0 at its end in the disc, just below
the disc's face towards the chain.
"""

from __future__ import annotations

from parts.design import Design
from parts.fits import shaft_class
from parts.making import Length, bar_stock, chamfer, flipped, turn_of, turned
from parts.outline import Part, Placement
from parts.places import lock_pin
from parts.sizes import Sizes
from parts.stack import Stack

KEY = "lock_pin"
COLOR = (0.80, 0.35, 0.25)
BELOW = 1.0  # mm that its end stays below the disc's face, where the link passes
GAP = 2.0  # mm between the disc's back and the frame's bush
IN_FRAME = 1.5  # diameters that the bush holds
HANDLE = 1.6  # diameters: head by which it is pulled out
FIT = "H8/f7"


def make(design: Design, sizes: Sizes, stack: Stack) -> list[Part]:
    lock = sizes.lock_pin
    if lock is None:
        return []
    d, back = lock.diameter, stack.sides[0]
    shank = sizes.disc.thickness - BELOW + GAP + IN_FRAME * d
    edge = chamfer(d, shank)
    body = turned((Length("shank", shank, d, chamfer_near=edge), Length("head", d, HANDLE * d)), back.away)
    at = flipped(lock_pin(lock), turn_of(design))
    return [
        Part(
            key=KEY,
            title="Lock pin",
            hand="",
            away=back.away,
            body=body,
            frame="disc",
            material=lock.material.name,
            density=lock.material.density,
            stock=bar_stock(HANDLE * d, design.identity.units),
            process="turn, harden, grind",
            placements=(Placement("disc", (*at, back.z(stack.disc_face + BELOW))),),
            color=COLOR,
            notes=(
                f"shank ground to {shaft_class(FIT)}; goes through a bush of the frame behind the disc, at the start and at "
                "the hold; only with the drive locked out",
            ),
        )
    ]
