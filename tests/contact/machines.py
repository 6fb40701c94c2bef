"""Engagements and machines used by several tests."""

from math import pi

from gearsolid.pairs.blank import Blank
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.planetary import PlanetaryStage
from gearsolid.pairs.reducer import OutputRollers, PinWheelReducer, Stack
from gearsolid.shop.bore import Bore
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing


def involute_pair(
    z1: int, z2: int, module: float = 1.0, *, shifts=(0.0, 0.0), thinning: float = 0.0, distance: float | None = None
) -> Engagement:
    a = InvoluteGear(z1, module, profile_shift=shifts[0], tooth_thinning=thinning)
    b = InvoluteGear(z2, module, profile_shift=shifts[1], tooth_thinning=thinning)
    distance = module * (z1 + z2) / 2 if distance is None else distance
    return engage(
        "pinion",
        a.outline,
        Motion(rate=1.0),
        "wheel",
        b.outline,
        Motion(centre_radius=distance, angle=pi + pi / z2, rate=-z1 / z2),
    )


def stage(
    zs: int = 18,
    zp: int = 27,
    zr: int = 72,
    planets: int = 3,
    *,
    thinning: float = 0.03,
    turns: tuple[float, ...] = (),
    ring_tip_shortening: float = 0.0,
) -> PlanetaryStage:
    module = 1.5
    return PlanetaryStage(
        InvoluteGear(zs, module, tooth_thinning=thinning),
        InvoluteGear(zp, module, tooth_thinning=thinning),
        InternalGear(zr, module, tooth_thinning=thinning, tip_shortening=ring_tip_shortening),
        planets,
        module * (zs + zp) / 2,
        Blank(10.0),
        Blank(10.0),
        Blank(10.0),
        planet_turns_deg=turns,
    )


def reducer(equidistant: float = 0.1, pin_growth: float = 0.0, discs: int = 2) -> PinWheelReducer:
    return PinWheelReducer(
        CycloidDisc(29, 0.8, 30.0, 1.5, equidistant=equidistant),
        PinRing(30, 30.0, 1.5 + pin_growth, 30.4),
        OutputRollers(8, 19.5, 3.5, 0.2),
        Stack(6.0, 0.5, 5.0),
        Bore(22.0),
        Bore(8.0),
        72.0,
        discs,
    )
