"""Each starter, weakened in one place with all other sizes held: caught where it is weak, and nowhere else."""

from __future__ import annotations

from dataclasses import dataclass
from fnmatch import fnmatchcase
from pathlib import Path

import pytest

from loads.records import Check
from tests.starters import NAMES, examined, put_all, settled


@dataclass(frozen=True)
class Weakness:
    """A kind of weakness: how it is made in each starter, what has to catch it there, what else it touches."""

    changes: dict[str, dict[str, str | None]]
    caught: dict[str, set[str]]  # part/site/check
    touched: tuple[str, ...]  # patterns of the same


def thickness(mm: str) -> dict[str, str | None]:
    """A link of another thickness. The stop is as high as the link, else a thinner link leaves it in the chain's plane."""
    return {"link__thickness": mm, "stop__height": None}


def crank_pin_yielding_at(mpa: int) -> dict[str, str | None]:
    return {
        "crank_pin__material": '"putty"',
        "materials.putty__kind": '"structural steel"',
        "materials.putty__yield": str(mpa),
        "materials.putty__ultimate": str(1.2 * mpa),
        "materials.putty__youngs_modulus": "210000",
        "materials.putty__density": "7850",
        "materials.putty__source": '"made up"',
    }


def chain(designation: str) -> dict[str, str | None]:
    """Another chain, with what has to go by its width and its pins left to be proportioned anew."""
    return {
        "chain__designation": f'"{designation}"',
        "chain_end__pin_diameter": None,
        "chain_end__width": None,
        "bearings.sheave__width": None,
        "shaft__phase_tolerance": None,  # the chain pin that the discs bend is as long as the chain is wide
    }


OF_THE_LINKS_THICKNESS = (
    # what the link bears, section by section: all of it goes with its thickness, struts and buckling with its cube
    "swing_link/crank_pin_eye/*",
    "swing_link/chain_pin_eye/*",
    "swing_link/stop_flank/*",
    "swing_link/between the pins/*",
    # the sink stays as deep as the pin's head is thick
    "swing_link/crank_pin_head_sink/floor under the pin head",
    # stop and link touch over the link's thickness
    "stop/contact/contact",
    # a block is as high as the link: less thread for its bolts
    "stop/root/thread stripping",
    "stop/root/bolt breaks before its thread strips",
)

KINDS = {
    "thin link": Weakness(
        {"impact-rig": thickness("7"), "seed-thrower": thickness("6"), "soil-tamper": thickness("5")},
        {
            "impact-rig": {"swing_link/crank_pin_eye/bearing", "swing_link/crank_pin_eye/bearing, BTH-1"},
            "seed-thrower": {"swing_link/crank_pin_eye/bearing", "stop/contact/contact"},
            # its eyes bear little: the line along which the post meets the link gets short first
            "soil-tamper": {"stop/contact/contact"},
        },
        OF_THE_LINKS_THICKNESS,
    ),
    "soft pin": Weakness(
        {
            "impact-rig": crank_pin_yielding_at(200),
            "seed-thrower": crank_pin_yielding_at(200),
            "soil-tamper": crank_pin_yielding_at(100),
        },
        {name: {"crank_pin/root/pin bending", "crank_pin/root/pin shear with bending"} for name in NAMES},
        (
            "crank_pin/root/pin *",
            "crank_pin/root/fatigue",
            "crank_pin/root/fit stress",  # the press fit stays as tight, the pin yields sooner
            "crank_pin/journal/contact in the eye",  # bearing and contact go by the softer of pin and plate
            "crank_disc/crank_pin_hole/bearing*",
            "swing_link/crank_pin_eye/bearing*",
        ),
    ),
    "small chain": Weakness(
        {"impact-rig": chain("LH1622"), "seed-thrower": chain("05B-1"), "soil-tamper": chain("05B-1")},
        {name: {"chain/strand/tension"} for name in NAMES},
        (
            "chain/strand/*",
            "sheave_bearing/bore/bush pressure",  # half the plates are half the width, for sheave and bush too
        ),
    ),
    "short edge": Weakness(
        {
            "impact-rig": {"disc__outer_diameter": "136"},
            "seed-thrower": {"disc__outer_diameter": "74"},
            "soil-tamper": {"disc__outer_diameter": "221"},
        },
        {name: {"crank_disc/crank_pin_hole / rim/web"} for name in NAMES},
        (
            "crank_disc/crank_pin_hole / */web",
            # what is left outside the hole is an eye's edge, torn out or split
            "crank_disc/crank_pin_hole/net tension*",
            "crank_disc/crank_pin_hole/tear-out*",
            "crank_disc/crank_pin_hole/single-plane fracture, BTH-1",
            "crank_disc/crank_pin_hole/fit stress",  # the ring about the pressed pin is thinner
            "crank_disc/crank_pin_hole/fatigue",
        ),
    ),
    "slender link": Weakness(
        # thinner than the pin's head is sunk: the seed-thrower's link is short, and would not buckle before
        {"impact-rig": thickness("5"), "seed-thrower": thickness("1.2"), "soil-tamper": thickness("3")},
        {
            name: {
                "swing_link/between the pins/strut about the thin side",
                "swing_link/between the pins/lateral buckling",
            }
            for name in NAMES
        },
        OF_THE_LINKS_THICKNESS,
    ),
}


def name_of(row: Check) -> str:
    return f"{row.part}/{row.site}/{row.check}"


def touches(patterns: tuple[str, ...], name: str) -> bool:
    return any(fnmatchcase(name, pattern) for pattern in patterns)


@pytest.fixture(scope="module")
def texts(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    """Every starter with its proportioned sizes written in."""
    return {name: settled(tmp_path_factory.mktemp(name), name) for name in NAMES}


@pytest.mark.parametrize("starter", NAMES)
def test_a_starter_holds_with_its_sizes_written_in(starter: str, texts: dict[str, str], tmp_path: Path) -> None:
    e = examined(tmp_path, texts[starter])
    assert not e.assumed
    assert e.holds


@pytest.mark.parametrize("starter", NAMES)
@pytest.mark.parametrize("kind", KINDS)
def test_a_weakness_is_caught_and_nothing_else_is(
    kind: str, starter: str, texts: dict[str, str], tmp_path: Path
) -> None:
    weak = KINDS[kind]
    e = examined(tmp_path, put_all(texts[starter], weak.changes[starter]))
    short = {name_of(row) for row in e.falls_short}
    assert weak.caught[starter] <= short
    assert {name for name in short if not touches(weak.touched, name)} == set()


def test_what_a_weakness_touches_is_there(texts: dict[str, str], tmp_path: Path) -> None:
    """A pattern that no row of any starter has would excuse nothing, and hide that a check was renamed."""
    names = {name_of(row) for text in texts.values() for row in examined(tmp_path, text).checks}
    names |= {"crank_disc/crank_pin_hole / rim/web"}  # a plate has one row for its thinnest web, whichever it is
    for weak in KINDS.values():
        for pattern in weak.touched:
            assert any(fnmatchcase(name, pattern) for name in names), pattern
