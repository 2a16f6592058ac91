"""Designs with every kind of far end but a chain, as text."""

from __future__ import annotations

_HEAD = """\
[moving]
stopped_elsewhere = true
[design]
title = "A machine"
[mechanism]
crank_radius = "58 mm"
link_length = "86 mm"
[spring]
preload = "0.5 kN"
rate = "60 N/mm"
"""
_SHEAVE = '[sheave]\ncenter = ["600 mm", "35 mm"]\n'

DESIGNS: dict[str, str] = {
    "rope": _HEAD + _SHEAVE + '[rope]\ndesignation = "6x36-IWRC 12"\n',
    "webbing": _HEAD + _SHEAVE + '[webbing]\nwidth = "60 mm"\n',
    "slide": _HEAD + '[tie]\nlength = "260 mm"\ndraw_direction = "180 deg"\nslide_point = ["0 mm", "20 mm"]\n',
    "rocker": _HEAD.replace("[spring]", 'stack = "single"\nrotation = "cw"\n[spring]')
    + '[tie]\nlength = "260 mm"\npivot = ["380 mm", "300 mm"]\narm = "300 mm"\nside = "right"\nspring_arm = "200 mm"\n'
    'exit_angle = "20 deg"\n',
}
