"""Hardened parts: a surface that yields later than the core, through the whole section or in a case."""

from __future__ import annotations

from dataclasses import replace

from parts.design import Material


def hardened(material: Material, surface_yield: float | None, case_depth: float | None, whole: bool = True) -> Material:
    """The material with its surface hardened to ``surface_yield`` (MPa), in a case of ``case_depth`` (mm).

    Without a case depth the section is hardened through where ``whole`` says so: then it yields at ``surface_yield``
    everywhere, and its ultimate strength is no lower than that. Else the core keeps what the grade's table says.
    """
    if surface_yield is None:
        return material
    if case_depth is None and whole:
        return replace(
            material,
            surface_yield=surface_yield,
            yields=tuple((size, surface_yield) for size, _ in material.yields),
            ultimates=tuple((size, max(strength, surface_yield)) for size, strength in material.ultimates),
        )
    return replace(material, surface_yield=surface_yield, case_depth=case_depth)


def is_case(material: Material) -> bool:
    """Whether a core of the grade's own strength lies under the hardened surface."""
    hard = material.surface_yield
    return hard is not None and (material.case_depth is not None or any(core != hard for _, core in material.yields))


def state(material: Material) -> str:
    """How a material is hardened, in words for a method: "through-hardened", "case 0.8 mm"; empty where it is not."""
    if material.surface_yield is None:
        return ""
    if material.case_depth is not None:
        return f"case {material.case_depth:.4g} mm"
    return "hardened surface" if is_case(material) else "through-hardened"


def section_words(material: Material) -> str:
    """What a method that goes by the whole section says after its formula; empty where nothing is hardened."""
    words = state(material)
    if words and is_case(material):
        words = f"core under a {words}"
    return f"; {words}" if words else ""


def hardness_note(material: Material, units: str) -> tuple[str, ...]:
    """The note on the part for the heat treater: surface yield, and how deep; none where nothing is hardened."""
    if material.surface_yield is None:
        return ()
    us = units == "us"
    strength = f"{material.surface_yield / 6.894757:.4g} ksi" if us else f"{material.surface_yield:.4g} MPa"
    depth = material.case_depth
    if depth is not None:
        how = f"case {depth / 25.4:.3g} in deep" if us else f"case {depth:.4g} mm deep"
    else:
        how = "depth of the case not given" if is_case(material) else "through"
    return (f"hardened to a surface yield strength of {strength}, {how}",)
