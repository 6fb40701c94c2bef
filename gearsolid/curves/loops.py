"""Ready outlines of circles: a disc, a hole, and patterns of them on a pitch circle."""

import numpy as np

from gearsolid.curves.outline import Outline, Piece, Role
from gearsolid.curves.primitives import Arc


def disc(radius: float) -> Outline:
    """A full circle of `radius` [mm] about the origin, material inside."""
    return Outline((Piece(Arc(0, radius, 0, 2 * np.pi), "tip"),), 1)


def hole(radius: float) -> Outline:
    """A circular hole of `radius` [mm] about the origin, material outside."""
    return Outline((Piece(Arc(0, radius, 2 * np.pi, 0), "hole"),), 1)


def _pattern(count: int, circle_radius: float, radius: float, angle: float, sweep: float, role: Role) -> Outline:
    centre = circle_radius * complex(np.exp(1j * angle))
    return Outline((Piece(Arc(centre, radius, angle, angle + sweep), role),), count)


def pins(count: int, circle_radius: float, radius: float, angle: float = 0.0) -> Outline:
    """`count` round pins of `radius` [mm] on a circle of `circle_radius` [mm], the first at `angle` [rad]."""
    return _pattern(count, circle_radius, radius, angle, 2 * np.pi, "pin")


def holes(count: int, circle_radius: float, radius: float, angle: float = 0.0) -> Outline:
    """`count` round holes of `radius` [mm] on a circle of `circle_radius` [mm], the first at `angle` [rad]."""
    return _pattern(count, circle_radius, radius, angle, -2 * np.pi, "hole")
