"""Fatigue for a stated number of shots: stress histories over one shot, counted cycles, lives and factors."""
