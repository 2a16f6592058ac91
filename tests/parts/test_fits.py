"""Limits of size against the values of ISO 286 and, over the whole range, against another library's table."""

import math

import isofits
import pytest

from parts.fits import fit_classes, limits

# ISO 286-2, in micrometres (lower, upper).
PUBLISHED = [
    ("H7", 20, 0, 21),
    ("p6", 20, 22, 35),
    ("g6", 20, -20, -7),
    ("H7", 50, 0, 25),
    ("h6", 12, -11, 0),
    # JIS B 0401, which prints ISO 286-2
    ("f7", 40, -50, -25),
    ("k6", 24, 2, 15),
    ("m6", 16, 7, 18),
    ("n6", 60, 20, 39),
    ("r6", 60, 41, 60),
    ("s6", 60, 53, 72),
    ("s6", 65, 53, 72),
    ("s6", 25, 35, 48),
]

NOT_IN_THE_OTHER_TABLE = {"E9", "s6"}


@pytest.mark.parametrize(("fit_class", "nominal", "lower", "upper"), PUBLISHED)
def test_published_values(fit_class: str, nominal: float, lower: float, upper: float) -> None:
    assert limits(fit_class, nominal) == pytest.approx((lower / 1000, upper / 1000), abs=1e-9)


@pytest.mark.parametrize("fit_class", sorted(set(fit_classes()) - NOT_IN_THE_OTHER_TABLE))
def test_whole_range_against_isofits(fit_class: str) -> None:
    body = "hole" if fit_class[0].isupper() else "shaft"
    # every whole size, its two neighbours across a range limit, and so every row of either table
    for nominal in (whole + part for whole in range(3, 250) for part in (0.01, 0.5, 1.0)):
        upper, lower = isofits.isotol(body, nominal, fit_class, "both")
        assert limits(fit_class, nominal) == pytest.approx((lower / 1000, upper / 1000), abs=1e-9), nominal


def test_classes_the_other_table_lacks_are_built_from_its_parts() -> None:
    for nominal in range(4, 251):
        low, up = limits("E9", nominal)
        assert low == pytest.approx(isofits.isotol("hole", nominal, "E6", "lower") / 1000)
        assert up - low == pytest.approx(isofits.isotol("hole", nominal, "H9", "upper") / 1000)
        low, up = limits("s6", nominal)
        assert up - low == pytest.approx(isofits.isotol("hole", nominal, "H6", "upper") / 1000)
        assert low > limits("r6", nominal)[0]


@pytest.mark.parametrize("fit_class", sorted(fit_classes()))
def test_rows_follow_on_one_another_and_say_where_they_are_from(fit_class: str) -> None:
    listed = fit_classes()[fit_class]
    assert listed.rows[0][0] == 0
    assert listed.rows[-1][1] == 250
    for (_, up_to, *_), (over, *_) in zip(listed.rows, listed.rows[1:], strict=False):
        assert up_to == over
    for over, up_to, lower, upper in listed.rows:
        assert over < up_to
        assert lower < upper
    widths = [upper - lower for *_, lower, upper in listed.rows]
    assert widths == sorted(widths)
    assert listed.source


def test_a_size_on_a_limit_belongs_to_the_smaller_range() -> None:
    assert limits("H7", 18) == pytest.approx((0, 0.018))
    assert limits("H7", math.nextafter(18, 19)) == pytest.approx((0, 0.021))


@pytest.mark.parametrize("nominal", [0.0, -3.0, 250.5, math.nan, math.inf])
def test_a_size_outside_the_table_is_refused_with_what_would_do(nominal: float) -> None:
    with pytest.raises(ValueError, match="over 0 and up to 250 mm would be accepted") as refusal:
        limits("H7", nominal)
    assert "H7" in str(refusal.value)


def test_an_unlisted_class_is_refused_with_the_listed_ones() -> None:
    with pytest.raises(ValueError, match="'H99' is not listed") as refusal:
        limits("H99", 20)
    for name in fit_classes():
        assert name in str(refusal.value)
