"""A study of the roll test itself: random designs, each judged by the dense polygons of `polygons` too.

The roll test must never call rolling what overlaps, and hardly ever call binding what is clear.
"""

from collections import Counter
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from enum import StrEnum
from math import pi, radians, sin

import numpy as np

from gearsolid.contact.polygons import PolygonPair
from gearsolid.contact.result import Contact, Verdict
from gearsolid.contact.roll import TOLERANCE, roll_engagements
from gearsolid.errors import DesignError
from gearsolid.pairs.blank import Blank
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

# Sides a pitch is drawn with; finer where the first drawing cannot decide.
_DRAWINGS = (600, 2400, 9600)

# Angles of a pitch looked at, and how often the neighbourhood of the lowest is looked at again.
_ANGLES = 24
_CLOSER = 3
_WITHIN = 5

# Draws of one design before the study gives up on finding one that exists.
_DRAWS = 200


class Judgement(StrEnum):
    """What the polygons say of a verdict.

    `agrees`: nothing speaks against it. `false rolls`: said to roll, but the polygons come nearer than promised.
    `false binds`: said to bind, but the polygons are clear of the stated depth. `undecided`: nearer to contact than the
    polygons can tell.
    """

    AGREES = "agrees"
    FALSE_ROLLS = "false rolls"
    FALSE_BINDS = "false binds"
    UNDECIDED = "undecided"


@dataclass(frozen=True)
class Judged:
    """One design of the study.

    Args:
        number: of the design [-].
        kind: what was drawn.
        verdict: of the roll test.
        judgement: of the polygons.
        clearance: by the roll test [mm].
        polygons: least distance the polygons found at the angles looked at [mm].
        error: how far that may be off [mm].
        refused: draws refused before this one [-].
    """

    number: int
    kind: str
    verdict: Verdict
    judgement: Judgement
    clearance: float
    polygons: float
    error: float
    refused: int


@dataclass(frozen=True)
class Study:
    """All designs judged.

    Args:
        designs: one entry each.
    """

    designs: tuple[Judged, ...] = field(default_factory=tuple)

    def count(self, judgement: Judgement) -> int:
        """Designs judged so [-]."""
        return sum(d.judgement is judgement for d in self.designs)

    @property
    def passed(self) -> bool:
        """No false `rolls`, and fewer than 0.5 % false `binds`."""
        false_binds = self.count(Judgement.FALSE_BINDS)
        return self.count(Judgement.FALSE_ROLLS) == 0 and false_binds < 0.005 * max(len(self.designs), 1)

    @property
    def text(self) -> str:
        """Both counts, what they are out of, and every design the two ways disagree on."""
        verdicts, kinds = Counter(d.verdict.value for d in self.designs), Counter(d.kind for d in self.designs)
        wrong = [d for d in self.designs if d.judgement in (Judgement.FALSE_ROLLS, Judgement.FALSE_BINDS)]
        return "\n".join(
            [
                f"designs        {len(self.designs)}: {_listed(kinds)}",
                f"verdicts       {_listed(verdicts)}",
                f"false rolls    {self.count(Judgement.FALSE_ROLLS)}",
                f"false binds    {self.count(Judgement.FALSE_BINDS)}",
                f"undecided      {self.count(Judgement.UNDECIDED)}",
                f"refused draws  {sum(d.refused for d in self.designs)}",
                *(
                    f"design {d.number}, {d.kind}: {d.judgement.value}, clearance {d.clearance:.6f} mm, by polygons "
                    f"{d.polygons:.6f} mm, at most {d.error:.6f} mm off"
                    for d in wrong
                ),
            ]
        )


def _listed(counts: Counter[str]) -> str:
    return ", ".join(f"{n} {name}" for name, n in sorted(counts.items()))


def study(
    designs: Iterable[int], seed: int = 0, tell: Callable[[Judged], None] | None = None, tolerance: float = TOLERANCE
) -> Study:
    """Roll random designs and judge each verdict by polygons.

    Args:
        designs: numbers of the designs; a number and a seed always give the same design [-].
        seed: of the whole study [-].
        tell: called with each design as it is judged.
        tolerance: of the roll test [mm].

    Raises:
        MissingLibraryError: shapely is not installed.
    """
    judged = []
    for number in designs:
        kind, e, refused = draw(number, seed)
        contact = roll_engagements([e], tolerance).contacts[0]
        judgement, polygons, error = judge(e, contact, tolerance)
        found = Judged(number, kind, contact.verdict, judgement, contact.clearance, polygons, error, refused)
        judged.append(found)
        if tell:
            tell(found)
    return Study(tuple(judged))


def judge(e: Engagement, contact: Contact, tolerance: float = TOLERANCE) -> tuple[Judgement, float, float]:
    """What dense polygons say of a verdict.

    Binding is judged at the angle it names, by half the depth it states; rolling by the gap it promises, at
    angles spread over a pitch, the neighbourhood of the lowest looked at more closely.

    Args:
        e: the engagement.
        contact: what the roll test said of it.
        tolerance: of the roll test [mm].

    Returns:
        Judgement, least distance of the polygons [mm], and how far that may be off [mm].
    """
    named, binds = radians(contact.input_angle), contact.verdict is Verdict.BINDS
    # A rolling pair promised its proven gap, a touching one no more than the tolerance.
    promised = contact.proven if contact.verdict is Verdict.ROLLS else -tolerance
    limit = contact.clearance / 2 if binds else promised
    for per_pitch in _DRAWINGS:
        pair = PolygonPair(e, per_pitch)
        found, error = pair.least(named) if binds else _least(pair, named), pair.error
        if found < limit - error:
            return Judgement.AGREES if binds else Judgement.FALSE_ROLLS, found, error
        if found > limit + error:
            return Judgement.FALSE_BINDS if binds else Judgement.AGREES, found, error
    return Judgement.UNDECIDED, found, error


def _least(pair: PolygonPair, named: float) -> float:
    """Least distance at evenly spread angles and closer and closer around the lowest of them [mm]."""
    step = pair.e.period / _ANGLES
    at = {psi: pair.least(psi) for psi in named + step * np.arange(_ANGLES)}
    for _ in range(_CLOSER):
        lowest = min(at, key=lambda psi: at[psi])
        near = lowest + np.linspace(-step, step, _WITHIN + 2)[1:-1]
        at |= {psi: pair.least(psi) for psi in near}
        step *= 2 / (_WITHIN + 1)
    return min(at.values())


def draw(number: int, seed: int) -> tuple[str, Engagement, int]:
    """The random design of a number: its kind, the engagement, and how many draws were refused before it.

    Args:
        number: of the design; kinds take turns [-].
        seed: of the study [-].

    Raises:
        DesignError: no draw gave a design that exists.
    """
    rng = np.random.default_rng([seed, number])
    kind = list(_KINDS)[number % len(_KINDS)]
    for refused in range(_DRAWS):
        try:
            return kind, _KINDS[kind](rng), refused
        except DesignError:
            continue
    raise DesignError(f"none of {_DRAWS} draws gave a design of kind {kind}: take another seed than {seed}")


def _external(rng: np.random.Generator) -> Engagement:
    z1, z2, m = int(rng.integers(8, 40)), int(rng.integers(8, 80)), float(rng.choice([0.5, 1, 2.5]))
    x1, x2 = (float(x) for x in rng.uniform(-0.3, 0.6, 2))
    thin = float(rng.uniform(0, 0.1)) * m
    a = InvoluteGear(z1, m, profile_shift=abs(x1) if z1 < 17 else x1, tooth_thinning=thin)
    b = InvoluteGear(z2, m, profile_shift=abs(x2) if z2 < 17 else x2, tooth_thinning=thin)
    return _involute(a, b, rng)


def _ring(rng: np.random.Generator) -> Engagement:
    z1, m = int(rng.integers(12, 40)), float(rng.choice([0.5, 1, 2]))
    z2, thin = z1 + int(rng.integers(8, 50)), float(rng.uniform(0, 0.08)) * m
    a = InvoluteGear(z1, m, tooth_thinning=thin)
    b = InternalGear(z2, m, tooth_thinning=thin, tip_shortening=float(rng.uniform(0, 0.4)) * m)
    return _involute(a, b, rng)


def _involute(a: InvoluteGear, b: InvoluteGear | InternalGear, rng: np.random.Generator) -> Engagement:
    """Near the distance at which the play is gone, so that about as many bind as roll."""
    full = InvolutePair(a, b)
    tight = full.centre_distance - b.hand * full.radial_play
    return _pair(a, b, tight + float(rng.uniform(-0.1, 0.1)) * a.module, rng)


def _cycloidal(rng: np.random.Generator) -> Engagement:
    z1, z2, m = int(rng.integers(20, 80)), int(rng.integers(7, 20)), float(rng.choice([0.3, 0.8, 1.5]))
    thin = float(rng.uniform(0, 0.25)) * m
    # Describing circles a hair below half the reference radius keep the flank a true hypocycloid.
    circles = z2 * m / 4 * 0.999, z1 * m / 4 * 0.999
    wheel = CycloidalGear(z1, m, *circles, float(rng.uniform(0.8, 1.3)) * m, 1.6 * m, tooth_thinning=thin)
    tip = float(rng.uniform(0.1, 0.6)) * m
    pinion = CycloidalGear(z2, m, circles[1], circles[0], tip, 1.5 * m, tooth_thinning=thin + 0.1 * m)
    return _pair(wheel, pinion, m * ((z1 + z2) / 2 + float(rng.uniform(-0.4, 0.1))), rng)


def _disc_and_pins(rng: np.random.Generator) -> Engagement:
    lobes, circle = int(rng.integers(6, 40)), float(rng.uniform(20, 60))
    throw = float(rng.uniform(0.3, 0.9)) * circle / (lobes + 1)
    pin = float(rng.uniform(0.2, 0.9)) * circle * sin(pi / (lobes + 1))
    disc = CycloidDisc(lobes, throw, circle, pin, equidistant=float(rng.uniform(-0.05, 0.1)))
    ring = PinRing(lobes + 1, circle, pin, circle + 0.2 * pin)
    e = engage("pins", ring.pattern, Motion(), "disc", disc.outline, Motion(throw, 0, 1, 0, -1 / lobes))
    return _turned(e, rng)


def _pair(
    a: InvoluteGear | CycloidalGear,
    b: InvoluteGear | InternalGear | CycloidalGear,
    apart: float,
    rng: np.random.Generator,
) -> Engagement:
    return _turned(SpurPair(a, b, apart, Blank(1.0), Blank(1.0)).engagements[0], rng)


def _turned(e: Engagement, rng: np.random.Generator) -> Engagement:
    """b turned off the middle of its play: sometimes into contact and beyond."""
    return replace(e, angle_b=e.angle_b + float(rng.normal(0, 0.01)) * e.b.pitch_angle)


_KINDS: dict[str, Callable[[np.random.Generator], Engagement]] = {
    "external": _external,
    "ring": _ring,
    "cycloidal": _cycloidal,
    "disc and pins": _disc_and_pins,
}
