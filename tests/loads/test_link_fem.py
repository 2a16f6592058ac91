"""Link and eyes against a finite element solution made here: nominal stress within 5 %, concentration within 10 %."""

from __future__ import annotations

import numpy as np
import pytest

from loads.checks.concentration import hole_in_strip_bending, hole_in_strip_tension, pin_loaded_eye, pin_loaded_strip
from loads.checks.link_sections import LinkShape, internal, net_sections, section_shear, section_stresses
from tests.loads.plane_stress import Plate, link_mesh, neat_pin_concentration, strip_mesh


def test_sections_of_a_seated_link() -> None:
    """A link 30 mm wide, 120 mm long, 1 mm thick, pulled back and across at the chain pin and pushed by its stop."""
    w, length, reach, d_1, d_2 = 30.0, 120.0, 90.0, 12.0, 10.0
    pull = np.array([-900.0, 300.0])
    push = -pull[1] * length / reach
    plate = Plate(link_mesh(w, length, d_1, d_2))
    load = plate.pin(length, d_2, (pull[0], pull[1])) + plate.side(reach, 4.0, w / 2.0, push)
    load = load + plate.pin(0.0, d_1, (-pull[0], -pull[1] - push))
    # in balance; three degrees of freedom keep it from floating
    feet = [plate.nodes(60.0, 0.0), plate.nodes(60.0, 0.0), plate.nodes(60.0, w / 2.0)]
    fixed = [plate.basis.nodal_dofs[i, node][0] for i, node in zip((0, 1, 0), feet, strict=True)]
    u = plate.solved(load, fixed)

    shape = LinkShape(length, reach, w, 1.0, d_1, d_2)
    x = np.array([35.0, 50.0, 65.0])
    cut = net_sections(shape, x)
    stop = np.array([[0.0], [push], [0.0]])
    inside = internal(shape, x, np.array([[pull[0]], [pull[1]], [0.0]]), np.zeros((3, 1)), stop)
    nominal, shear = section_stresses(shape, cut, inside)[:, 0], section_shear(cut, inside)[:, 0]
    for i, at in enumerate(x):
        y, normal, tangential = plate.across(u, float(at), w)
        fit = np.polyfit(y, normal, 1)  # at the outer fibres, a hair beyond the last point
        edge = max(abs(np.polyval(fit, w / 2.0)), abs(np.polyval(fit, -w / 2.0)))
        assert edge == pytest.approx(nominal[i], rel=0.05)
        assert np.max(np.abs(normal)) == pytest.approx(nominal[i], rel=0.05)
        assert np.max(np.abs(tangential)) == pytest.approx(shear[i], rel=0.05)
        assert np.trapezoid(normal, y) == pytest.approx(pull[0], rel=0.01)


@pytest.mark.parametrize("ratio", [0.15, 0.3, 0.5])
def test_an_open_hole_in_a_strip(ratio: float) -> None:
    """A strip 20 mm wide, pulled with 100 MPa and bent with 100 MPa at its edges."""
    w, d = 20.0, 20.0 * ratio
    plate = Plate(strip_mesh(w, d))
    edge = plate.edge_of_hole(0.0, d)
    feet = [plate.nodes(-2.5 * w, 0.0), plate.nodes(-2.5 * w, 0.0), plate.nodes(2.5 * w, 0.0)]
    fixed = [plate.basis.nodal_dofs[i, node][0] for i, node in zip((0, 1, 1), feet, strict=True)]
    pulled = plate.solved(plate.ends(2.5 * w, 100.0, 0.0), fixed)
    found = float(np.max(plate.hoop(pulled, edge))) / (100.0 * w / (w - d))
    assert float(hole_in_strip_tension(d, w)) == pytest.approx(found, rel=0.10)
    bent = plate.solved(plate.ends(2.5 * w, 0.0, 100.0 / (w / 2.0)), fixed)
    moment = 100.0 * w**2 / 6.0
    found = float(np.max(plate.hoop(bent, edge))) / (6.0 * moment * d / (w**3 - d**3))
    assert float(hole_in_strip_bending(d, w)) == pytest.approx(found, rel=0.10)


@pytest.mark.parametrize("ratio", [0.3, 0.4, 0.5, 0.6])
def test_an_eye_on_a_neat_pin(ratio: float) -> None:
    """Against contact with a stiff pin without friction; the curve for a square end a width away lies below."""
    found = neat_pin_concentration(20.0, 20.0 * ratio, 80.0)
    assert float(pin_loaded_eye(20.0 * ratio, 20.0)) == pytest.approx(found, rel=0.10)
    assert float(pin_loaded_strip(20.0 * ratio, 20.0)) < 1.05 * found
