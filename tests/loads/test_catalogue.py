"""The listed chains and materials are whole: every row becomes a chain or a material that can be used."""

from __future__ import annotations

from loads.catalogue import load_catalogue
from parts.far_ends.chain import ChainTable, build_chain, find_row
from parts.problems import Problem


def test_every_listed_chain_can_be_chosen() -> None:
    catalogue = load_catalogue()
    assert {"LH1644", "08B-1", "16B-1"} <= set(catalogue.chains)
    for designation in catalogue.chains:
        row = find_row(designation, None, catalogue)
        assert not isinstance(row, Problem)
        chain, assumed = build_chain(ChainTable(), row)
        assert [a.key for a in assumed] == ["chain.strands", "chain.slack"], designation
        assert 0 < chain.tongue_width < chain.width_over_pins, designation
        assert 0 < chain.pin_diameter < min(chain.plate_height, chain.pitch), designation
        assert chain.min_tensile_strength > 0
        assert chain.source


def test_every_listed_material_is_usable() -> None:
    materials = load_catalogue().materials
    assert materials
    for material in materials.values():
        assert material.yield_strength(10) <= material.ultimate_strength(10)
        assert material.youngs_modulus > 1000
        assert material.density > 1000
        assert material.source
