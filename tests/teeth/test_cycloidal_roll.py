"""Cycloidal, clock and lantern pairs in the roll test: exact pairs run true, ogival ones waver within their play."""

from math import pi, radians

import numpy as np
import pytest

from gearsolid.contact.result import Verdict
from gearsolid.contact.roll import roll_engagements
from gearsolid.curves.field import field_of
from gearsolid.pairs.engagement import engage
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.phasing import mate_angle
from gearsolid.teeth.clock import cycloidal_pair, ogival_pair
from gearsolid.teeth.clock_pair import Drives
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.cycloidal_relations import contact_ratio
from gearsolid.teeth.cycloidal_ring import CycloidalRing
from gearsolid.teeth.lantern import LanternPinion, LanternRing, LanternWheel, PinRingPinion

THIN = 0.05


def external(z1, z2, circles, addenda, module=1.0):
    """Two wheels; `circles` and `addenda` of the first and of the second, in modules; thinned by THIN each."""
    (a1, a2), (h1, h2), m = circles, addenda, module
    first = CycloidalGear(z1, m, a2 * m, a1 * m, h1 * m, (h2 + 0.25) * m, THIN * m)
    second = CycloidalGear(z2, m, a1 * m, a2 * m, h2 * m, (h1 + 0.25) * m, THIN * m)
    return first, second


def internal(z1, z2, circles, addenda):
    (a1, a2), (h1, h2) = circles, addenda
    pinion = CycloidalGear(z1, 1, a2, a1, h1, h2 + 0.25, THIN)
    return pinion, CycloidalRing(z2, 1, a1, a2, h2, h1 + 0.25, THIN)


EXACT = {
    "12/12": external(12, 12, (3, 3), (1, 1)),
    "20/30": external(20, 30, (3, 3), (1, 1)),
    "20/30, 15-tooth base": external(20, 30, (3.75, 3.75), (1, 1)),
    "15/60": external(15, 60, (3.75, 3.75), (1, 1)),
    "8/64 radial": external(8, 64, (2, 16), (0.5, 1.4)),
    "20/30, module 0.2": external(20, 30, (3, 3), (1, 1), 0.2),
    "12 in 60": internal(12, 60, (3, 3), (1, 1)),
}
LANTERNS = {
    "64 drive 8": LanternWheel(64, 8, 1, 0.525, 1.9, 0.9, 0.1),
    "96 drive 12, module 0.3": LanternWheel(96, 12, 0.3, 0.2, 0.55, 0.35, 0.03),
    "ring of 60 drives 12": LanternRing(60, 12, 1, 0.7, 1.2, 1.1, 0.1),
    "ring of 24 drives 12": LanternRing(24, 12, 1, 0.7, 1.2, 1.1, 0.1),
    "12 drive 40 pins": PinRingPinion(12, 40, 1, 0.7, 1.0, 1.1, 0.1),
}


def engagement(driver, driven, *, inside=False):
    """A tooth of the driver stands opposite a space of the driven member on the line of centres.

    The driver's axis is the origin. Where one member lies inside the other both turn the same way, and the pitch point
    is on the side of the smaller one.
    """
    if not inside:
        distance = driver.reference_radius + driven.reference_radius
        motion = Motion(distance, 0.0, angle=mate_angle(driven.teeth, pi, 0.0), rate=-driver.teeth / driven.teeth)
    else:
        distance = driver.reference_radius - driven.reference_radius
        side = 0.0 if distance > 0 else pi
        motion = Motion(abs(distance), side, angle=mate_angle(driven.teeth, 0.0, 0.0), rate=driver.teeth / driven.teeth)
    return engage("driver", driver.outline, Motion(rate=1.0), "driven", driven.outline, motion)


def rolled(driver, driven, *, inside=False):
    return roll_engagements([engagement(driver, driven, inside=inside)]).contacts[0]


def wavering(contact, driven):
    """Transmission error at the reference circle [mm]."""
    return radians(contact.transmission_error) * driven.reference_radius


def both_ways(pair):
    return (pair, pair[::-1])


@pytest.mark.parametrize("way", [0, 1], ids=["first drives", "second drives"])
@pytest.mark.parametrize("pair", EXACT.values(), ids=EXACT)
def test_exact_pairs_run_true_with_the_play_they_were_given(pair, way):
    driver, driven = both_ways(pair)[way]
    c = rolled(driver, driven, inside=driver.hand != driven.hand)
    assert c.verdict is Verdict.ROLLS
    assert wavering(c, driven) < 0.05e-3 * driver.module
    assert c.play == pytest.approx(2 * THIN * driver.module, abs=1e-6)


def nearest(driver, driven, share, *, inside=False):
    """Least gap at 12 angles of a pitch [mm], the driven member set back by its share of the play [mm].

    Found from many points of the driver without the search of the roll test; it exceeds the true gap by as much as the
    points miss the contact.
    """
    e = engagement(driver, driven, inside=inside)
    set_back = -np.sign(e.rate_b) * share / driven.reference_radius
    own = np.concatenate([p.curve.point(p.curve.sample(800)) for p in e.a.pieces])
    whole = np.multiply.outer(np.exp(1j * e.a.pitch_angle * np.arange(e.a.order)), own).ravel()
    for psi in e.period * np.arange(12) / 12:
        z = whole * np.exp(1j * (e.angle_a + e.rate_a * psi)) + e.centre_a - e.centre_b
        z = z * np.exp(-1j * (e.angle_b + e.rate_b * psi + set_back))
        z = z[(np.abs(z) < e.b.r_max + 0.05) & (np.abs(z) > e.b.r_min - 0.05)]
        yield float(field_of(e.b).near(z).distance.min())


@pytest.mark.parametrize("way", [0, 1], ids=["first drives", "second drives"])
@pytest.mark.parametrize("pair", EXACT.values(), ids=EXACT)
def test_driven_flanks_touch_at_every_angle(pair, way):
    driver, driven = both_ways(pair)[way]
    gaps = list(nearest(driver, driven, THIN * driver.module, inside=driver.hand != driven.hand))
    assert min(gaps) > -1e-7
    assert max(gaps) < 2e-5 * driver.module


@pytest.mark.parametrize("mate", LANTERNS.values(), ids=LANTERNS)
def test_trundles_touch_at_every_angle(mate):
    lantern = LanternPinion(mate.trundles, mate.module, mate.trundle_radius)
    gaps = list(nearest(mate, lantern, mate.tooth_thinning / 2, inside=not isinstance(mate, LanternWheel)))
    assert min(gaps) > -1e-7
    assert max(gaps) < 2e-5 * mate.module


def test_touch_check_sees_a_flank_of_another_describing_circle():
    other = CycloidalGear(30, 1, 3, 3.2, 1, 1.25, THIN)
    assert max(nearest(EXACT["20/30"][0], other, THIN)) > 1e-4


# Exact pairs whose contact passes a joint of two pieces, or turns fast, at single angles; shares of the play.
HARD = {
    "radial flanks, module 0.2": (*external(8, 64, (2, 16), (0.5, 1.4), 0.2), THIN * 0.2),
    "lantern": (LanternWheel(30, 10, 2, 1.3, 2.9, 2.1, 0.2), LanternPinion(10, 2, 1.3), 0.1),
}


@pytest.mark.parametrize("pair", HARD.values(), ids=HARD)
def test_pairs_with_a_hard_stop_do_touch_at_every_angle(pair):
    driver, driven, share = pair
    gaps = list(nearest(driver, driven, share))
    assert min(gaps) > -1e-7
    assert max(gaps) < 2e-5 * driver.module


@pytest.mark.parametrize("pair", HARD.values(), ids=HARD)
def test_pairs_with_a_hard_stop_run_true(pair):
    driver, driven, _ = pair
    assert wavering(rolled(driver, driven), driven) < 0.05e-3 * driver.module


@pytest.mark.parametrize("mate", LANTERNS.values(), ids=LANTERNS)
def test_lanterns_run_true_and_keep_the_contact_their_formula_says(mate):
    lantern = LanternPinion(mate.trundles, mate.module, mate.trundle_radius)
    c = rolled(mate, lantern, inside=not isinstance(mate, LanternWheel))
    assert c.verdict is Verdict.ROLLS
    assert wavering(c, lantern) < 0.05e-3 * mate.module
    assert c.play == pytest.approx(mate.tooth_thinning, abs=1e-6)
    assert c.contact_ratio == pytest.approx(mate.contact_ratio, abs=1e-3)


def test_pair_off_its_centre_distance_does_not_run_true():
    """The checks above are themselves checked: cycloidal teeth run true at one distance only."""
    driver, driven = EXACT["20/30"]
    distance = 25 + 0.05
    motion = Motion(distance, 0.0, angle=mate_angle(30, pi, 0.0), rate=-20 / 30)
    e = engage("driver", driver.outline, Motion(rate=1.0), "driven", driven.outline, motion)
    assert wavering(roll_engagements([e]).contacts[0], driven) > 1e-3


@pytest.mark.parametrize("short", [0, 1, 2])
def test_rings_bind_or_lose_play_below_their_least_number_of_teeth(short):
    """Faces of ring and pinion keep clear from `base` teeth of difference on; a 15-tooth base here."""
    pinion, ring = internal(15, 30 - short, (3.75, 3.75), (1, 1))
    c = rolled(pinion, ring, inside=True)
    given = 2 * THIN
    assert (c.play == pytest.approx(given, abs=1e-6)) == (short == 0)
    assert c.play < given + 1e-6


@pytest.mark.parametrize(("teeth", "leaves"), [(60, 6), (70, 7), (64, 8), (80, 10), (96, 12)])
def test_ogival_pairs_roll_with_play_and_waver(teeth, leaves):
    """The practical standard: never binding, less play than the thinness of the leaves, a ratio that wavers a little.

    The arcs stand a little proud of the exact curve, most with many leaves. Contact before the line of centres is
    normal with few leaves; it is no failure.
    """
    pair = ogival_pair(teeth, leaves, 1.0)
    c = rolled(pair.driver, pair.driven)
    assert c.verdict is Verdict.ROLLS
    stated = pi / 2 - pair.pinion.thickness
    assert 0.6 * stated < c.play < stated + 1e-6
    assert 5e-3 < wavering(c, pair.driven) < 0.1
    assert c.contact_ratio >= 1


@pytest.mark.parametrize("drives", Drives)
@pytest.mark.parametrize(("teeth", "leaves"), [(60, 6), (64, 8), (96, 12)])
def test_exact_clock_pairs_run_true_either_way(teeth, leaves, drives):
    pair = cycloidal_pair(teeth, leaves, 1.0, drives=drives)
    c = rolled(pair.driver, pair.driven)
    assert c.verdict is Verdict.ROLLS
    assert wavering(c, pair.driven) < 0.05e-3
    assert c.play == pytest.approx(0.1 * pi, abs=1e-6)


@pytest.mark.parametrize("name", ["20/30", "15/60", "8/64 radial", "12 in 60"])
def test_counted_contact_ratio_is_that_of_the_formula(name):
    driver, driven = EXACT[name]
    c = rolled(driver, driven, inside=driver.hand != driven.hand)
    assert c.contact_ratio == pytest.approx(contact_ratio(driver, driven).total, abs=1e-3)
