"""What the values of a design must be to one another; the bounds of each by itself are in ``parts.schema``.

Each function takes what could be read (None for the rest) and returns what is wrong. A rule whose values are not all
there says nothing: that they are missing is said once, by :func:`missing_keys`.
"""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping

from parts.polygons import covers, polygon_fault
from parts.problems import Problem, key_of, written
from parts.schema import (
    EnclosureTable,
    MaterialTable,
    MechanismTable,
    MovingTable,
    SheaveTable,
    SpringTable,
    StopTable,
)

NEEDED: Mapping[str, tuple[str, ...]] = {"mechanism": ("crank_radius", "link_length"), "spring": ()}
OF_A_SHEAVE = ("center",)
NEEDED_OF_A_MATERIAL = ("yield", "ultimate", "youngs_modulus", "density", "source")
_BLOCK, _POST = ("length", "width"), ("diameter",)


def missing_keys(path: tuple[str, ...], raw: object, needed: tuple[str, ...]) -> Iterator[Problem]:
    """A problem for each needed key that a table does not have; one for the whole table where it is not there."""
    if raw is None:
        wants = f" with {' and '.join(needed)}" if needed else ""
        yield Problem(key_of(path), None, "nothing", f"a table [{key_of(path)}]{wants}", "missing")
    elif isinstance(raw, dict):
        for key in needed:
            if key not in raw:
                yield Problem(key_of((*path, key)), None, "nothing", f"{key} = …", "missing")


def mechanism_problems(mechanism: MechanismTable) -> Iterator[Problem]:
    """The link longer than the crank radius, the stop's contact between the two pins."""
    r, length, reach = mechanism.crank_radius, mechanism.link_length, mechanism.stop_reach
    if r is not None and length is not None and length <= r:
        yield Problem(
            "mechanism.link_length",
            None,
            _mm(length),
            f"more than crank_radius, {_mm(r)}",
            "the link must be longer than the crank radius",
        )
    if reach is not None and length is not None and reach >= length:
        yield Problem(
            "mechanism.stop_reach",
            None,
            _mm(reach),
            f"less than link_length, {_mm(length)}",
            "the stop must meet the link between its two pins",
        )


def sheave_problems(mechanism: MechanismTable, sheave: SheaveTable, pitch_radius: float | None) -> Iterator[Problem]:
    """The sheave clear of the disc axis and out of the chain pin's reach, at every pose of crank and link."""
    if sheave.center is None or pitch_radius is None:
        return
    distance = math.hypot(*sheave.center)
    if distance <= pitch_radius:
        yield Problem(
            "sheave.center",
            None,
            f"{_mm(distance)} from the disc axis",
            f"more than pitch_radius, {_mm(pitch_radius)}",
            "the sheave lies over the disc axis",
        )
    elif mechanism.crank_radius is not None and mechanism.link_length is not None:
        reach = mechanism.crank_radius + mechanism.link_length
        if distance - pitch_radius <= reach:
            yield Problem(
                "sheave.center",
                None,
                f"{_mm(distance)} from the disc axis, rim at {_mm(distance - pitch_radius)}",
                f"a rim more than crank_radius + link_length, {_mm(reach)}, from the disc axis",
                "the chain pin can reach the sheave",
            )


def spring_problems(spring: SpringTable, raw: Mapping[str, object]) -> Iterator[Problem]:
    """Either a table or preload and rate, and a force in any case."""
    if "table" in raw:
        for key in ("preload", "rate"):
            if key in raw:
                yield Problem(
                    f"spring.{key}",
                    None,
                    written(raw[key]),
                    f"table, or preload and rate; leave {key} out",
                    "the spring's table gives this already",
                )
    elif "rate" not in raw:
        yield Problem("spring.rate", None, "nothing", "rate (0 for a constant force), or table", "missing")
    elif spring.rate == 0 and (spring.preload == 0 or "preload" not in raw):
        yield Problem("spring.rate", None, "no preload and no rate", "one of them above 0", "this spring never pulls")


def stop_problems(stop: StopTable, raw: Mapping[str, object]) -> Iterator[Problem]:
    """Only the sizes that the stop's style has."""
    if stop.style is None and "style" in raw:
        return
    style = stop.style or ("post" if "diameter" in raw or not any(key in raw for key in _BLOCK) else "block")
    foreign, other = (_BLOCK, "block") if style == "post" else (_POST, "post")
    for key in foreign:
        if key in raw:
            own = _POST if style == "post" else _BLOCK
            yield Problem(
                f"stop.{key}",
                None,
                written(raw[key]),
                f'{", ".join((*own, "height"))}; or style = "{other}"',
                f"a {style} has no {key}",
            )


def hardening_problems(name: str, raw: Mapping[str, object]) -> Iterator[Problem]:
    """A case is that of a hardened surface."""
    if "case_depth" in raw and "surface_yield" not in raw:
        what = f"{name}.surface_yield as well, the yield strength of the hardened surface"
        yield Problem(f"{name}.case_depth", None, written(raw["case_depth"]), what, "a case without its strength")


def enclosure_problems(enclosure: EnclosureTable, raw: Mapping[str, object]) -> Iterator[Problem]:
    """An outline or distances, of polygons that do not cross themselves, and no obstacle on the disc axis."""
    distances = [key for key in ("above", "below", "behind", "ahead") if key in raw]
    if "outline" in raw:
        for key in distances:
            yield Problem(
                f"enclosure.{key}",
                None,
                written(raw[key]),
                "outline, or distances; not both",
                "the enclosure's outline gives this already",
            )
    elif not distances and not enclosure.obstacles:
        found = "a table without a wall or obstacle" if raw else "an empty table"
        yield Problem("enclosure", None, found, "outline, or above, below, behind, ahead; obstacles", "")
    if enclosure.outline is not None and (fault := polygon_fault(enclosure.outline)):
        yield Problem("enclosure.outline", None, fault, _POLYGON)
    elif enclosure.outline is not None and not covers(enclosure.outline, (0.0, 0.0)):
        accepted = "an outline with the disc axis, [0, 0], inside it"
        yield Problem("enclosure.outline", None, "an outline beside the disc axis", accepted)
    for place, corners in enumerate(enclosure.obstacles or []):
        key = key_of(("enclosure", "obstacles", place))
        if fault := polygon_fault(corners):
            yield Problem(key, None, fault, _POLYGON)
        elif covers(corners, (0.0, 0.0)):
            yield Problem(key, None, "an obstacle over the disc axis", "obstacles clear of the disc axis, [0, 0]")


_POLYGON = "three or more corners [x, y] in order round the polygon, whose sides do not meet but at the corners"


def moving_problems(moving: MovingTable, raw: Mapping[str, object]) -> Iterator[Problem]:
    """The masses that a release needs, and both numbers of a bumper or none."""
    if "mass" not in raw and not moving.stopped_elsewhere:
        yield Problem(
            "moving.mass",
            None,
            "nothing",
            "mass = …, or stopped_elsewhere = true where the chain need not stop it",
            "missing",
        )
    if "payload_leaves_at" in raw and "payload_mass" not in raw:
        yield Problem(
            "moving.payload_mass", None, "nothing", "payload_mass, since payload_leaves_at is given", "missing"
        )
    bumper = ("bumper_stiffness", "bumper_travel")
    for key, other in (bumper, bumper[::-1]):
        if key in raw and other not in raw:
            yield Problem(f"moving.{other}", None, "nothing", f"{other}, since {key} is given", "missing")


def material_problems(path: tuple[str, ...], material: MaterialTable) -> Iterator[Problem]:
    if material.yield_ is not None and material.ultimate is not None and material.yield_ > material.ultimate:
        yield Problem(
            key_of((*path, "yield")),
            None,
            f"{material.yield_:.6g} MPa",
            f"no more than ultimate, {material.ultimate:.6g} MPa",
            "a yield strength above the ultimate strength",
        )


def _mm(value: float) -> str:
    return f"{value:.6g} mm"
