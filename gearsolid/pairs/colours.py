"""Colours of parts in assemblies and pictures: red, green, blue from 0 to 1."""

Colour = tuple[float, float, float]

BRASS: Colour = (0.80, 0.63, 0.30)
STEEL: Colour = (0.55, 0.60, 0.66)
SLATE: Colour = (0.33, 0.40, 0.48)
TEAL: Colour = (0.20, 0.52, 0.53)
RUST: Colour = (0.72, 0.40, 0.27)
PEARL: Colour = (0.86, 0.87, 0.88)
