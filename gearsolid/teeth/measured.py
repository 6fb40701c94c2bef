"""An old wheel from measured points: centre and tooth count found, all teeth laid over each other, one pitch fitted."""

import math
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gearsolid.curves.curve import Curve, Mirrored, Points, Reals
from gearsolid.curves.field import field_of
from gearsolid.curves.fit import Spline
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.curves.smoothing import LEAST_POINTS, smoothed
from gearsolid.errors import DesignError
from gearsolid.teeth.laid_over import laid_over
from gearsolid.teeth.measured_rim import fitted_rim

# A closing gap longer than this multiple of the longest other step leaves the outline open.
_OPEN = 3.0
_ROUNDS = 3


@dataclass(frozen=True)
class Measured:
    """A wheel or ring as measured, itself a member.

    Args:
        outline: one pitch about the axis, a tooth centred on +x.
        centre: its axis in the measured frame [mm].
        turn: direction of the tooth on +x in the measured frame [deg].
        rms: root mean square distance of the points from the outline [mm].
        worst: largest distance [mm].
        pitch_error: largest departure of a tooth from even pitch, as an arc at half tooth height [mm].
        points: number of points used.
    """

    outline: Outline
    centre: complex
    turn: float
    rms: float
    worst: float
    pitch_error: float
    points: int

    @property
    def teeth(self) -> int:
        """[-]."""
        return self.outline.order

    @property
    def _is_ring(self) -> bool:
        return self.outline.area < 0

    @cached_property
    def tip_radius(self) -> float:
        """[mm]."""
        return self.outline.r_min if self._is_ring else self.outline.r_max

    @cached_property
    def root_radius(self) -> float:
        """[mm]."""
        return self.outline.r_max if self._is_ring else self.outline.r_min

    @property
    def reference_radius(self) -> float:
        """Half way between tip and root [mm]: measured points know no pitch circle."""
        return (self.tip_radius + self.root_radius) / 2

    @property
    def sentence(self) -> str:
        """What was found, and how well it fits."""
        return (
            f"{self.teeth} teeth about x {self.centre.real:.4f}, y {self.centre.imag:.4f} mm; {self.points} points lie "
            f"{self.rms * 1e3:.2f} um rms and {self.worst * 1e3:.2f} um at most from the outline; the teeth stand "
            f"up to {self.pitch_error * 1e3:.1f} um off even pitch"
        )


def measured_wheel(points: Points, teeth: int | None = None, centre: complex | None = None) -> Measured:
    """An external wheel from points along its whole outline.

    Args:
        points: x + iy in order along the outline, either way round, closed [mm], shape (n,).
        teeth: tooth count [-], or None to count.
        centre: axis in the measured frame [mm], or None to find it.

    Raises:
        DesignError: the outline is open, has too few points, another tooth count, or teeth that are not evenly spaced.
    """
    return _measured(points, teeth, centre, 1)


def measured_ring(points: Points, teeth: int | None = None, centre: complex | None = None) -> Measured:
    """A ring with internal teeth from points along its toothed hole; arguments and errors as in `measured_wheel`.

    Args:
        points: x + iy in order along the outline, either way round, closed [mm], shape (n,).
        teeth: tooth count [-], or None to count.
        centre: axis in the measured frame [mm], or None to find it.
    """
    return _measured(points, teeth, centre, -1)


def measured_flank(points: Points, teeth: int, centre: complex = 0, tooth_deg: float = 0.0) -> Measured:
    """A wheel from the points of one flank, which is mirrored; tip and root become arcs through its ends.

    Args:
        points: x + iy in order along the flank, either way [mm], shape (n,).
        teeth: tooth count [-].
        centre: axis in the measured frame [mm].
        tooth_deg: direction of the middle of the tooth, or of the next one, in the measured frame [deg].

    Raises:
        DesignError: too few points, or the flank crosses the middle of its tooth or of the space beside it.
    """
    pitch = 2 * math.pi / teeth
    z = (_complex(points) - centre) * np.exp(-1j * math.radians(tooth_deg))
    z = z * np.exp(-1j * pitch * np.round(np.median(np.angle(z)) / pitch))
    z = z if np.median(np.angle(z)) < 0 else np.conj(z)
    z = z if abs(z[0]) < abs(z[-1]) else z[::-1]
    fit = smoothed(z, _along(z))
    flank = fit.spline
    tip, root = (float(np.angle(w)) for w in (flank.end, flank.start))
    if not (-pitch / 2 < root and tip < 0):
        raise DesignError(
            f"the flank runs from {math.degrees(root):.4g} to {math.degrees(tip):.4g} deg beside the middle of its "
            f"tooth; it must stay between {-math.degrees(pitch) / 2:.4g} deg, the middle of the space, and 0: check "
            f"tooth_deg, centre and the count of {teeth} teeth"
        )
    pieces = (
        Piece(flank, "flank"),
        Piece(Arc(0, abs(flank.end), tip, -tip), "tip"),
        Piece(Mirrored(flank), "flank"),
        Piece(Arc(0, abs(flank.start), -root, root + pitch), "root"),
    )
    rms, worst = float(np.sqrt(np.mean(fit.offsets**2))), float(np.max(np.abs(fit.offsets)))
    return Measured(Outline(pieces, teeth), centre, tooth_deg, rms, worst, 0.0, z.size)


def _complex(points: Points) -> Points:
    z = np.asarray(points, dtype=complex).ravel()
    if not np.all(np.isfinite(z)):
        raise DesignError(f"{int(np.sum(~np.isfinite(z)))} of {z.size} measured points have no finite coordinates")
    return z


def _along(z: Points) -> Reals:
    """Share of the way along a row of points."""
    way = np.concatenate(([0.0], np.cumsum(np.abs(np.diff(z)))))
    return way / way[-1]


def _measured(points: Points, teeth: int | None, centre: complex | None, hand: int) -> Measured:
    z = _closed(_complex(points), hand)
    axis = _centroid(z) if centre is None else complex(centre)
    for around in range(_ROUNDS):
        found = laid_over(z - axis, hand, teeth)
        rim = fitted_rim(found.points, found.shares, found.teeth, found.step)
        outline = Outline(rim, found.teeth)
        near = field_of(outline).near(found.points)
        if centre is not None or around == _ROUNDS - 1:
            break
        # The axis moves to where the points would lie best about it.
        normals = near.outward * found.step**found.tooth * np.exp(1j * found.first)
        columns = np.column_stack([normals.real, normals.imag])
        axis += complex(*np.linalg.lstsq(columns, near.distance, rcond=None)[0])
    middle = _tooth_middle(outline, found.half_height)
    turned = tuple(Piece(_turned(p.curve, complex(np.exp(-1j * middle))), p.role) for p in rim)
    return Measured(
        Outline(turned, found.teeth),
        axis,
        math.degrees((found.first + middle) % (2 * math.pi)),
        float(np.sqrt(np.mean(near.distance**2))),
        float(np.max(np.abs(near.distance))),
        found.pitch_error * found.half_height,
        z.size,
    )


def _tooth_middle(outline: Outline, radius: float) -> float:
    """Polar angle of the middle of the tooth at a radius [rad], near 0."""
    z = np.concatenate([p.curve.point(p.curve.sample(400)) for p in outline.pieces])
    z = np.concatenate([z, z * outline.step])
    over = (np.abs(z) - radius) * (1 if outline.area > 0 else -1)
    up, down = (np.flatnonzero(way * np.diff(np.sign(over)) > 0) for way in (1, -1))
    after = down[down > up[0]][0]
    angles = []
    for k in (up[0], after):
        share = over[k] / (over[k] - over[k + 1])
        angles.append(float(np.angle(z[k] + share * (z[k + 1] - z[k]))))
    start, end = angles
    return start + float(np.angle(np.exp(1j * (end - start)))) / 2


def _turned(curve: Curve, factor: complex) -> Curve:
    if isinstance(curve, Spline):
        return curve.turned(factor)
    if isinstance(curve, Segment):
        return Segment(curve.first * factor, curve.last * factor)
    assert isinstance(curve, Arc)
    turn = float(np.angle(factor))
    return Arc(0, curve.radius, curve.angle_from + turn, curve.angle_to + turn)


def _closed(z: Points, hand: int) -> Points:
    """Points once round, material on the left."""
    z = z[:-1] if abs(z[-1] - z[0]) < 1e-9 * np.max(np.abs(z - z.mean())) else z
    z = z[np.abs(np.diff(z, append=z[0])) > 0]
    if z.size < 3 * LEAST_POINTS:
        raise DesignError(f"{z.size} measured points; a wheel needs at least {LEAST_POINTS} for each of its teeth")
    steps = np.abs(np.diff(z))
    gap, longest = abs(z[0] - z[-1]), float(steps.max())
    if gap > _OPEN * longest:
        raise DesignError(
            f"the outline is open: its last point lies {gap:.4g} mm from the first, while no other step is longer than "
            f"{longest:.4g} mm: measure all the way round"
        )
    area = float(np.sum(np.imag(np.conj(z) * np.roll(z, -1)))) / 2
    return z if area * hand > 0 else z[::-1]


def _centroid(z: Points) -> complex:
    """Centroid of the polygon: the axis of an even wheel."""
    ahead = np.roll(z, -1)
    cross = np.imag(np.conj(z) * ahead)
    return complex(np.sum((z + ahead) * cross) / (3 * np.sum(cross)))
