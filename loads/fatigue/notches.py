"""Stress round a loaded hole and at a pin's shoulder, as fatigue needs it: at each point, for each direction of load."""

from __future__ import annotations

import math
import tomllib
from functools import lru_cache
from importlib.resources import files

import numpy as np

from loads.checks.concentration import shoulder_bending
from parts.design import Floats

STEPS = np.radians(np.arange(0.0, 181.0, 15.0))
# harmonics of a pin's pressure 4P/(π d t)·max(cos δ, 0), each as 2P/(π d t) times: order, odd, share
HARMONICS = {
    "cos_1": (1, False, 1.0),
    "sin_1": (1, True, 1.0),
    "even": (0, False, 2.0 / math.pi),
    "cos_2": (2, False, 4.0 / (3.0 * math.pi)),
    "sin_2": (2, True, 4.0 / (3.0 * math.pi)),
    "cos_4": (4, False, -4.0 / (15.0 * math.pi)),
    "sin_4": (4, True, -4.0 / (15.0 * math.pi)),
}


def step_concentration(large: float, small: float, r: float) -> float:
    """K_t of a shoulder with fillet r in a bent round bar, on the smaller section; 1 where there is no step. mm.

    A radius beyond the curve's range, 0.1 ≤ h/r ≤ 20, is brought to its end.
    Source: :func:`loads.checks.concentration.shoulder_bending`.
    """
    h = (large - small) / 2.0
    return max(1.0, float(shoulder_bending(large, small, min(max(r, h / 20.0), h / 0.1)))) if h > 0.0 else 1.0


@lru_cache(maxsize=2)
def _table(kind: str) -> tuple[Floats, Floats]:
    """d over width (r), and stresses (r, harmonics, steps)."""
    rows = tomllib.loads((files("loads") / "data" / "holes.toml").read_text(encoding="utf-8"))[kind]
    return np.array([row["ratio"] for row in rows]), np.array([[row[name] for name in HARMONICS] for row in rows])


def influence(kind: str, ratio: float, points: Floats) -> Floats:
    """Stress times d t over force at points of a hole's edge (k), for each harmonic: (k, 7), for 0 < d/width < 1.

    ``kind`` is "eye" or "edge", ``points`` count from the direction to the rest of the part. Straight between the rows of
    the table. Below its first d/width that row serves; above its last, what that row has grows by ((1 − last)/(1 − d/w))²,
    as bending of what is left beside the hole does. Source: finite elements, ``loads/data/holes.toml``.
    """
    ratios, table = _table(kind)
    above = int(np.clip(np.searchsorted(ratios, ratio), 1, len(ratios) - 1))
    share = float(np.clip((ratio - ratios[above - 1]) / (ratios[above] - ratios[above - 1]), 0.0, 1.0))
    row = table[above - 1] * (1.0 - share) + table[above] * share
    grown = max(1.0, (1.0 - ratios[-1]) / (1.0 - ratio)) ** 2
    turned = np.mod(points + math.pi, 2.0 * math.pi) - math.pi
    step = np.abs(turned) / STEPS[1]
    before = np.minimum(step.astype(np.intp), len(STEPS) - 2)
    half = row[:, before] * (1.0 - (step - before)) + row[:, before + 1] * (step - before)
    odd = np.array([[odd] for _, odd, _ in HARMONICS.values()])
    return np.asarray(grown * np.where(odd, np.sign(turned), 1.0) * half).T


def edge_stress(kind: str, force: Floats, points: Floats, outward: float, d: float, width: float, t: float) -> Floats:
    """Hoop stress (k, n) in MPa at points of a hole's edge (rad) under a pin's force (2, n) that turns.

    ``outward`` (rad) points from the hole away from the rest of the part. The pin presses by the cosine over the half
    that it pushes; its pressure's harmonics up to the fourth are those of :func:`influence`, the higher ones act so near
    the edge that each gives −p_n cos nδ as in a wide plate. N, mm. Source: superposition of finite element solutions.
    """
    to_body = points - outward - math.pi
    c, s = math.cos(outward + math.pi), math.sin(outward + math.pi)
    x, y = c * force[0] + s * force[1], -s * force[0] + c * force[1]
    size = np.maximum(np.hypot(x, y), 1e-12)
    cos_2, sin_2 = (x**2 - y**2) / size, 2.0 * x * y / size
    cos_4, sin_4 = (cos_2**2 - sin_2**2) / size, 2.0 * cos_2 * sin_2 / size
    loads = np.stack([x, y, size, cos_2, sin_2, cos_4, sin_4])
    high = np.stack([
        0.0 * to_body if order == 1 else share * (np.sin(order * to_body) if odd else np.cos(order * to_body))
        for order, odd, share in HARMONICS.values()
    ], axis=1)  # fmt: skip
    unit = np.stack([np.cos(to_body), np.sin(to_body)], axis=1)
    weights = influence(kind, d / width, to_body) + 2.0 / math.pi * high
    return np.asarray((weights @ loads - 2.0 / math.pi * np.abs(unit @ loads[:2])) / (d * t))


def outward_concentration(kind: str, d: float, width: float) -> float:
    """K_t of an outward pull F, the greatest stress along the hole's edge on F/((width − d) t); as :func:`edge_stress`."""
    points = np.concatenate([STEPS, STEPS + math.pi])
    stress = edge_stress(kind, np.array([[-1.0], [0.0]]), points, math.pi, d, width, 1.0)
    return float(stress.max()) * (width - d)
