"""Limits of size for holes and shafts: what a nominal size and an ISO tolerance class allow."""

from __future__ import annotations

import difflib
import tomllib
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files

Row = tuple[float, float, float, float]  # over, up to and including (mm), lower and upper deviation (µm)


@dataclass(frozen=True, slots=True)
class FitClass:
    """One tolerance class: its rows by nominal size, smallest first, and where they are from."""

    name: str
    rows: tuple[Row, ...]
    source: str
    confirmed: bool


@lru_cache(maxsize=1)
def fit_classes() -> dict[str, FitClass]:
    """Every listed tolerance class by its name; capital letters are holes, small ones shafts."""
    table = tomllib.loads((files("parts") / "data" / "fits.toml").read_text(encoding="utf-8"))
    return {
        name: FitClass(
            name=name,
            rows=tuple((float(a), float(b), float(low), float(up)) for a, b, low, up in entry["rows"]),
            source=str(entry["source"]),
            confirmed=bool(entry["confirmed"]),
        )
        for name, entry in table.items()
    }


@lru_cache(maxsize=512)
def limits(fit_class: str, nominal: float) -> tuple[float, float]:
    """Lower and upper limit deviation of a size, as in 20 H7 = +0.021/0 mm.

    Parameters
    ----------
    fit_class : tolerance class, "H7" for a hole, "g6" for a shaft
    nominal : nominal size, mm, over 0 and up to the class's last row (250)

    Returns
    -------
    (lower, upper) deviation from the nominal size, mm

    Raises
    ------
    ValueError
        if the class is not listed or the nominal size is outside its rows; the message says what would be accepted.

    Source: ISO 286-2; the class's own entry in ``parts/data/fits.toml`` says where its rows were read.

    >>> limits("H7", 20.0)
    (0.0, 0.021)
    >>> limits("g6", 20.0)
    (-0.02, -0.007)
    """
    listed = fit_classes().get(fit_class)
    if listed is None:
        known = ", ".join(sorted(fit_classes()))
        raise ValueError(f"tolerance class {fit_class!r} is not listed; one of {known} would be accepted")
    for over, up_to, lower, upper in listed.rows:
        if over < nominal <= up_to:
            return lower / 1000, upper / 1000
    first, last = listed.rows[0][0], listed.rows[-1][1]
    raise ValueError(
        f"no {fit_class} limits for a nominal size of {nominal:g} mm; "
        f"over {first:g} and up to {last:g} mm would be accepted"
    )


def classes_of(fit: str) -> tuple[str, str]:
    """Hole class and shaft class of a fit such as "H7/r6".

    Raises ``ValueError`` with the nearest listed fit where it is not two listed classes, hole first.
    """
    hole, _, shaft = fit.replace(" ", "").partition("/")
    holes = [name for name in fit_classes() if name[0].isupper()]
    shafts = [name for name in fit_classes() if name[0].islower()]
    if hole in holes and shaft in shafts:
        return hole, shaft
    raise ValueError(f"{_nearest(hole, holes, 'H7')}/{_nearest(shaft, shafts, 'h6')}")


def hole_class(fit: str) -> str:
    """The hole half of a fit, "H7" of "H7/r6"."""
    return classes_of(fit)[0]


def shaft_class(fit: str) -> str:
    """The shaft half of a fit, "r6" of "H7/r6"."""
    return classes_of(fit)[1]


def _nearest(name: str, listed: list[str], otherwise: str) -> str:
    """The listed class most like a name: the same letter first, then what is spelt alike."""
    same = [x for x in listed if x[0] == name[:1]]
    close = difflib.get_close_matches(name, same or listed, n=1, cutoff=0.0 if same else 0.5)
    return close[0] if close else otherwise


def covers(nominal: float) -> bool:
    """Whether the classes list a nominal size (mm)."""
    return 0.0 < nominal <= min(listed.rows[-1][1] for listed in fit_classes().values())


def interference(fit: str, nominal: float) -> tuple[float, float]:
    """Least and largest interference (mm, negative: clearance) of a fit at a nominal size (mm).

    Least: smallest shaft in the largest hole; largest: the other way round. Source: ISO 286-1:2010, 3.3 (fits).

    >>> interference("H7/p6", 20.0)
    (0.001, 0.035)
    """
    hole, shaft = classes_of(fit)
    hole_low, hole_up = limits(hole, nominal)
    shaft_low, shaft_up = limits(shaft, nominal)
    return round(shaft_low - hole_up, 6), round(shaft_up - hole_low, 6)
