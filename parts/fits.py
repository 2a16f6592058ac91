"""Limits of size for holes and shafts: what a nominal size and an ISO tolerance class allow."""

from __future__ import annotations

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
