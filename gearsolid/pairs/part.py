"""A part of a machine: the flat section it is made of, its width, and how it moves."""

from dataclasses import dataclass
from itertools import accumulate, chain
from math import isfinite

import numpy as np

from gearsolid.curves.curve import Reals
from gearsolid.curves.loops import disc, hole
from gearsolid.curves.outline import Outline
from gearsolid.errors import DesignError
from gearsolid.pairs.motion import Motion
from gearsolid.shop.shaft_hole import ShaftHole

# Height above the bottom face [mm] and turn there [rad].
Level = tuple[float, float]


@dataclass(frozen=True)
class Boss:
    """Loops raised on the top face of a body: pins, or a hub.

    A single loop round the axis is a hub: a bore of the body runs on through it.

    Args:
        outline: pattern of loops, each wholly on the face.
        height: [mm] above the face.
    """

    outline: Outline
    height: float

    def __post_init__(self) -> None:
        if not self.height > 0:
            raise DesignError(f"a boss is {self.height:g} mm high; it must be above 0")


@dataclass(frozen=True)
class Groove:
    """A relief turned into the teeth at the middle of the width, for the tools of double helical teeth to run out in.

    Args:
        width: [mm] along the axis.
        depth: of its floor beyond the root circle [mm].

    Raises:
        DesignError: width or depth is not above 0.
    """

    width: float
    depth: float

    def __post_init__(self) -> None:
        for name, value in (("wide", self.width), ("deep below the root circle", self.depth)):
            if not value > 0:
                raise DesignError(f"the relief groove is {value:g} mm {name}; it must be above 0")

    def floor(self, rim: Outline) -> Outline:
        """The circle left where the teeth of a rim are turned away."""
        return disc(rim.r_min - self.depth) if rim.area > 0 else hole(rim.r_max + self.depth)


def is_toothed(outline: Outline) -> bool:
    """Whether an outline is a rim with flanks: what turns in a body that is twisted."""
    return outline.is_chain and any(p.role == "flank" for p in outline.pieces)


@dataclass(frozen=True)
class Body:
    """A solid of constant section: outer boundary, holes, an optional bore, optional bosses on its top face.

    Toothed rims may turn on their way up, which makes the teeth helical; everything else goes straight through.

    Args:
        outer: outer boundary, material on its left.
        width: [mm] along the axis.
        holes: further boundaries inside (toothed hole of an annulus, roller holes), material on their left.
        bore: shaft hole, or None.
        bosses: raised loops on the top face.
        z: height of the bottom face [mm].
        twists: turn of the toothed rims [rad] over each of equally long stretches of the width, from the bottom up,
            positive right-hand: one for helical teeth, two opposite ones for double helical; none for straight teeth.
            The outlines are the section at the bottom face.
        groove: relief between the two stretches of double helical teeth, or None.
    """

    outer: Outline
    width: float
    holes: tuple[Outline, ...] = ()
    bore: ShaftHole | None = None
    bosses: tuple[Boss, ...] = ()
    z: float = 0.0
    twists: tuple[float, ...] = ()
    groove: Groove | None = None

    def __post_init__(self) -> None:
        if not self.width > 0:
            raise DesignError(f"the face width is {self.width:g} mm; it must be above 0")
        self._check_twists()
        hubs = [b for b in self.bosses if b.outline.is_chain]
        if len(hubs) > 1:
            raise DesignError(f"a body has {len(hubs)} hubs on its top face; it can have one")
        opening = next((h for h in self.holes if h.is_chain), None)
        if opening and (self.bore or hubs):
            raise DesignError("a body with an opening round the axis (an annulus) has no place for a bore or a hub")
        solid = min(o.r_min for o in (self.outer, *(h.outline for h in hubs), *self._floors))
        if self.bore:
            if not self.bore.reach < solid:
                raise DesignError(
                    f"the shaft hole ({self.bore.callout} mm) reaches {self.bore.reach:.5g} mm from the axis with its "
                    f"keyways, corners and chamfers, and the body has {solid:.5g} mm; take a smaller hole or a larger "
                    "body"
                )
            # The bore itself knows whether its two chamfers find room in this length.
            self.bore.volume(self.bore_length)

    def _check_twists(self) -> None:
        if self.groove and len(self.twists) != 2:
            raise DesignError(
                f"a relief groove is given to teeth with {len(self.twists)} helices; it parts the two of double "
                "helical teeth: leave it out"
            )
        if self.groove and not self.groove.width < self.width:
            raise DesignError(
                f"the relief groove is {self.groove.width:g} mm wide; it must be below the face width, "
                f"{self.width:g} mm"
            )
        if not self.twists:
            return
        if not all(isfinite(t) for t in self.twists):
            raise DesignError(f"the twists of the body are {self.twists} rad; they must be numbers")
        rims = (self.outer, *self.holes)
        toothed = [o for o in rims if is_toothed(o)]
        if not toothed:
            raise DesignError(
                "a body without a toothed rim is twisted; only flanks make a rim that turns: leave it out"
            )
        inner = min(o.r_min for o in (*toothed, *self._floors))
        outer = max(o.r_max for o in (*toothed, *self._floors))
        for other in rims:
            if not is_toothed(other) and other.r_min < outer and other.r_max > inner:
                raise DesignError(
                    f"a straight boundary between radii {other.r_min:.5g} and {other.r_max:.5g} mm lies beside "
                    f"helical teeth between {inner:.5g} and {outer:.5g} mm; keep it inside or outside them"
                )

    @property
    def _floors(self) -> list[Outline]:
        """Floors of the relief groove."""
        return [self.groove.floor(o) for o in (self.outer, *self.holes) if is_toothed(o)] if self.groove else []

    @property
    def courses(self) -> tuple[tuple[Level, ...], ...]:
        """Stretches of teeth from the bottom up, parted by the groove, each as the levels it turns steadily between.

        A level is a height above the bottom face [mm] and the turn of toothed rims there [rad].
        """
        gap = self.groove.width if self.groove else 0.0
        stretches = len(self.twists) or 1
        stretch = (self.width - gap) / stretches
        turns = tuple(accumulate(self.twists or (0.0,), initial=0.0))
        if not self.groove:
            return (tuple((stretch * k, turn) for k, turn in enumerate(turns)),)
        return ((0.0, 0.0), (stretch, turns[1])), ((stretch + gap, turns[1]), (self.width, turns[2]))

    def turn_at(self, height: Reals) -> Reals:
        """Turn of toothed rims [rad] at heights above the bottom face [mm], any shape."""
        heights, turns = zip(*chain.from_iterable(self.courses), strict=True)
        return np.interp(height, heights, turns)

    @property
    def twist_rate(self) -> float:
        """Turn of toothed rims per height at the bottom face [rad/mm]; 0 for straight teeth."""
        _, (height, turn), *_ = self.courses[0]
        return turn / height

    @property
    def hub(self) -> Boss | None:
        """The boss round the axis, or None."""
        return next((b for b in self.bosses if b.outline.is_chain), None)

    @property
    def bore_length(self) -> float:
        """Length of the shaft hole [mm]: through the body and its hub."""
        return self.width + (self.hub.height if self.hub else 0.0)

    @property
    def volume(self) -> float:
        """Exact volume [mm3]: areas by Green's theorem times widths, less the bore."""
        rims = (self.outer, *self.holes)
        area = sum(o.area for o in rims)
        bored = self.bore.volume(self.bore_length) if self.bore else 0.0
        relief = 0.0
        if self.groove:
            turned = sum(o.area - self.groove.floor(o).area for o in rims if is_toothed(o))
            relief = turned * self.groove.width
        return area * self.width - relief - bored + sum(b.outline.area * b.height for b in self.bosses)


@dataclass(frozen=True)
class Part:
    """A named body in its place in a machine.

    Args:
        name: ASCII, unique in the machine ("planet 2").
        body: what is made.
        motion: how it moves.
        colour: red, green, blue from 0 to 1.
    """

    name: str
    body: Body
    motion: Motion
    colour: tuple[float, float, float]
