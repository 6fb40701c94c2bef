"""Non-circular wheels: teeth that a rack leaves when it rolls on a closed pitch curve."""

import math
from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np

from gearsolid.curves.curve import Curve, Points, Reals
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.line_on_curve import LineOnCurve
from gearsolid.curves.outline import Outline, Piece, Role
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.pitch_curve import PitchCurve
from gearsolid.curves.primitives import Arc, Segment
from gearsolid.errors import DesignError
from gearsolid.teeth.rack import ISO53_A, BasicRack

# Places looked at along each flank, and steps of the search for where it meets the tip curve.
_PLACES = 17
_STEPS = 20
_MET = 1e-12
# A root land narrower than this share of the module is none.
_NO_LAND = 1e-9


class _Flanks(NamedTuple):
    """One side of every tooth of an outline's pitch.

    Args:
        top: height over the pitch line of the rack's point that forms each flank's tip [mm], shape (n,).
        tip: place of each flank's tip along the pitch curve [mm], shape (n,).
    """

    top: Reals
    tip: Reals


@dataclass(frozen=True)
class NoncircularWheel:
    """An external wheel on a closed convex pitch curve, as its generating rack leaves it.

    Tip and root follow the pitch curve at the rack's dedendum and addendum. A tooth is centred on the beginning of the
    pitch curve, or a space.

    Args:
        pitch_curve: the pitch curve about the wheel's axis.
        teeth: number of teeth on it [-].
        starts_with_space: whether a space is centred on the beginning of the pitch curve.
        pressure_angle_deg: of the rack [deg].
        rack: heights and tip rounding of the basic rack, in modules.

    Raises:
        DesignError: the pitch curve is hollow somewhere, the rack undercuts or points a tooth, or cannot exist; the
            message gives the place and the limit.
    """

    pitch_curve: PitchCurve
    teeth: int
    starts_with_space: bool = False
    pressure_angle_deg: float = 20.0
    rack: BasicRack = ISO53_A

    def __post_init__(self) -> None:
        if self.teeth < 4:
            raise DesignError(f"a non-circular wheel has {self.teeth} teeth; it must have 4 or more")
        if not 0 < self.pressure_angle_deg < 45:
            raise DesignError(f"the pressure angle is {self.pressure_angle_deg:g} deg; it must lie between 0 and 45")
        self.rack.check(self.pressure_angle_deg)
        self._check_hollow()
        self._check_undercut()
        self._check_tip()

    def _check_hollow(self) -> None:
        least, at = self.pitch_curve.flattest
        if least < 0:
            raise DesignError(
                f"the pitch curve is hollow near x {at.real:.4g}, y {at.imag:.4g} mm, its curvature there is "
                f"{least:.4g} 1/mm; a rack needs 0 or more everywhere: take less eccentricity or fewer lobes"
            )

    def _check_undercut(self) -> None:
        sharpest, at = self.pitch_curve.sharpest
        depth = self.rack.straight_dedendum(self.pressure_angle_deg)
        need = self.module * depth / self._sine**2
        heights = -np.linspace(0, self.module * depth, _PLACES)
        pace = np.concatenate([self._pace(heights[None, :], side) for side in (-1, 1)])
        if np.any(pace <= 0):
            least = math.ceil(depth * self.pitch_curve.length * sharpest / (math.pi * self._sine**2))
            raise DesignError(
                f"the rack undercuts near x {at.real:.4g}, y {at.imag:.4g} mm, where the pitch curve's radius of "
                f"curvature is {1 / sharpest:.4g} mm; module {self.module:.4g} mm needs about {need:.4g} mm: take "
                f"about {least} teeth, a larger pressure angle or a lower dedendum"
            )

    def _check_tip(self) -> None:
        before, after = self._sides
        land = self._following(before.tip) - after.tip
        if np.any(land <= 0):
            k = int(np.argmin(land))
            at = complex(self.pitch_curve.by_length.point(np.asarray(after.tip[k])))
            raise DesignError(
                f"the tooth near x {at.real:.4g}, y {at.imag:.4g} mm is pointed below its tip, its land would be "
                f"{land[k]:.4g} mm of the pitch curve; it must be above 0: take a lower addendum or more teeth"
            )

    @property
    def _sine(self) -> float:
        return math.sin(math.radians(self.pressure_angle_deg))

    @property
    def pitch(self) -> float:
        """Length of the pitch curve for each tooth [mm]."""
        return self.pitch_curve.length / self.teeth

    @property
    def module(self) -> float:
        """pitch / pi [mm]."""
        return self.pitch / math.pi

    @property
    def order(self) -> int:
        """How often the outline repeats round the axis [-]."""
        return math.gcd(self.pitch_curve.order, self.teeth)

    @property
    def _motion(self) -> LineOnCurve:
        return LineOnCurve(self.pitch_curve.by_length)

    @cached_property
    def _spaces(self) -> Reals:
        """Middles of the spaces of one pitch of the outline along the pitch curve [mm]."""
        first = 0.0 if self.starts_with_space else 0.5
        return np.asarray((np.arange(self.teeth // self.order) + first) * self.pitch, dtype=float)

    def _following(self, places: Reals) -> Reals:
        """The same places on the tooth after."""
        return np.append(places[1:], places[0] + self.pitch_curve.length / self.order)

    def _rack_point(self, height: Reals, side: int) -> Points:
        """Points of every space's tool tooth at a height over the pitch line [mm]; side -1 is the one walked first."""
        lean = math.tan(math.radians(self.pressure_angle_deg))
        return height + 1j * (self._spaces[:, None] + side * (self.pitch / 4 + height * lean))

    def _direction(self, side: int) -> complex:
        """Direction of a tool flank with growing height."""
        return complex(np.exp(1j * side * math.radians(self.pressure_angle_deg)))

    def _pace(self, height: Reals, side: int) -> Reals:
        """Speed along each flank against that along the rack's; 0 or less where it is undercut."""
        motion, p, along = self._motion, self._rack_point(height, side), self._direction(side)
        tangent = np.full(p.shape, along)
        roll = motion.meet(p, tangent, 1)
        rate = motion.meet_rate(p, tangent, np.ones(p.shape), np.zeros(p.shape), 1)
        slide = np.real(motion.velocity(p, roll) * np.conj(motion.turn(roll) * along))
        return np.asarray(1 + slide * rate, dtype=float)

    @cached_property
    def _sides(self) -> tuple[_Flanks, _Flanks]:
        """The two flanks of every space, the one walked first leading down into it."""
        return self._met(-1), self._met(1)

    def _met(self, side: int) -> _Flanks:
        """Where the flanks of all spaces meet the tip curve, by Newton's method on all of them at once."""
        motion, walk = self._motion, self.pitch_curve.by_length
        along, addendum = self._direction(side), self.rack.addendum * self.module
        stretch = 1 / math.cos(math.radians(self.pressure_angle_deg))
        top = np.full(self._spaces.size, addendum)
        tip = self._spaces + side * self.pitch / 4
        for _ in range(_STEPS):
            p = self._rack_point(top[:, None], side)[:, 0]
            tangent = np.full(p.shape, along)
            roll = motion.meet(p, tangent, 1)
            rate = motion.meet_rate(p, tangent, np.full(p.shape, stretch), np.zeros(p.shape), 1)
            slope = motion.turn(roll) * along * stretch + motion.velocity(p, roll) * rate
            forward, bend = walk.derivative(tip), walk.turning(tip)
            miss = motion.place(p, roll) - walk.point(tip) + 1j * addendum * forward
            onward = forward * (1 + addendum * bend)
            sine = np.imag(np.conj(slope) * onward)
            top = top - np.imag(np.conj(miss) * onward) / sine
            tip = tip - np.imag(np.conj(miss) * slope) / sine
            if np.all(np.abs(miss) <= _MET * self.pitch_curve.radii[1]):
                break
        return _Flanks(top, tip)

    @cached_property
    def outline(self) -> Outline:
        """One pitch, counter-clockwise, from the tip before the first space to the same place a pitch on."""
        down, up = self._sides
        pieces: list[Piece] = []
        ends = self._following(down.tip)
        for k, middle in enumerate(self._spaces):
            pieces += self._space(float(middle), float(down.top[k]), float(up.top[k]))
            walk = self.pitch_curve.by_length.part(float(up.tip[k]), float(ends[k]))
            pieces.append(Piece(Parallel(walk, -self.rack.addendum * self.module), "tip"))
        return Outline(tuple(pieces), self.order)

    def _space(self, middle: float, down: float, up: float) -> list[Piece]:
        """Flank, fillet, root, fillet and flank of one space, from heights of the rack over its pitch line [mm]."""
        angle = math.radians(self.pressure_angle_deg)
        lean, rounding = math.tan(angle), self.rack.root_radius * self.module
        foot = -self.rack.straight_dedendum(self.pressure_angle_deg) * self.module
        deep = -self.rack.dedendum * self.module
        land = max(0.0, self.rack.half_tip_land(self.pressure_angle_deg) * self.module)

        def flank(height: float, side: int) -> complex:
            return complex(height, middle + side * (self.pitch / 4 + height * lean))

        centres = [complex(deep + rounding, middle + side * land) for side in (-1, 1)]
        tool: list[tuple[Curve, Role]] = [
            (Segment(flank(down, -1), flank(foot, -1)), "flank"),
            (Arc(centres[0], rounding, -math.pi / 2 - angle, -math.pi), "fillet"),
            (Segment(complex(deep, middle - land), complex(deep, middle + land)), "root"),
            (Arc(centres[1], rounding, math.pi, math.pi / 2 + angle), "fillet"),
            (Segment(flank(foot, 1), flank(up, 1)), "flank"),
        ]
        if land <= _NO_LAND * self.module:
            del tool[2]
        return [Piece(Envelope(curve, self._motion), role) for curve, role in tool]

    @cached_property
    def tip_radius(self) -> float:
        """Greatest radius [mm]."""
        return self.outline.r_max

    @cached_property
    def root_radius(self) -> float:
        """Least radius [mm]."""
        return self.outline.r_min
