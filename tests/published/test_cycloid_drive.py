from dataclasses import replace
from math import cos, degrees, pi, radians, sin, sqrt

import numpy as np
import pytest
from golden import cases, kinds, misses
from scipy.optimize import brentq, minimize_scalar

from gearsolid.contact.roll import roll_engagements
from gearsolid.curves.length import ArcLength
from gearsolid.pairs.engagement import engage
from gearsolid.pairs.line_contact import contact_stress, reduced_modulus
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.pin_forces import LeverLaw, ring_pin_loss, roller_force, roller_force_sum
from gearsolid.pairs.pin_tolerances import PinErrors
from gearsolid.pairs.reducer import OutputRollers, PinWheelReducer, Stack
from gearsolid.pairs.reducer_ratios import disc_held, ring_held, two_stage_carrier_held, two_stage_ring_held
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobed_ring import LobedRing
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

ARCSEC = 3600
STEEL = reduced_modulus(206000, 0.3, 206000, 0.3)
POLYGON = 400_000


def polygon(outline, points=POLYGON):
    """Area and perimeter of a polygon of about `points` corners."""
    each = points // (outline.order * len(outline.pieces))
    pitch = np.concatenate([p.curve.point(p.curve.sample(each))[:-1] for p in outline.pieces])
    step = np.roll(pitch, -1)
    step[-1] = pitch[0] * outline.step
    area, length = np.sum(np.imag(np.conj(pitch) * step)) / 2, np.sum(np.abs(step - pitch))
    return outline.order * area, outline.order * length


def sharpest(path, sign=1):
    """Phase [deg] and radius of the sharpest convex place of a pin path, by looking everywhere."""

    def radius(phase):
        found = sign * path.curvature_radius(np.asarray(phase))
        return np.where(found > 0, found, np.inf)

    phase = np.linspace(0, pi, 4001)
    k = int(np.argmin(radius(phase)))
    low, high = phase[max(k - 1, 0)], phase[min(k + 1, 4000)]
    found = minimize_scalar(radius, bounds=(low, high), method="bounded", options={"xatol": 1e-10})
    return degrees(found.x), found.fun


def perimeter(outline):
    return outline.order * sum(ArcLength(p.curve, 1e-9).total for p in outline.pieces)


def only(expected, *names):
    return expected._replace(values={k: v for k, v in expected.values.items() if k in names})


def misplaced(expected, name, found, share):
    """Complaint when a band found by looking everywhere does not reach just beyond one printed from a few places."""
    prefix = f"{name}_" if name else ""
    least, most = (expected.values[f"{prefix}{end}"] for end in ("least", "most"))
    half = [0.5 * 10.0 ** -len(v.partition(".")[2]) for v in (least, most)]
    below, above = float(least) - found.min() + half[0], found.max() - float(most) + half[1]
    if 0 <= below <= share * float(least) + 2 * half[0] and 0 <= above <= share * float(most) + 2 * half[1]:
        return None
    return f"{name}: printed {least} to {most}, found {found.min()} to {found.max()}"


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_geometry", "disc"))
def test_disc(given, expected):
    disc = CycloidDisc(**given)
    path, outline, n = disc.path, disc.outline, disc.pins
    phase, radius = sharpest(path)
    bend = lambda u: float(1 / path.curvature_radius(np.asarray(u)))  # noqa: E731
    area, round_about = polygon(outline)
    assert (outline.area, perimeter(outline)) == pytest.approx((area, round_about), rel=1e-7)
    computed = {
        "k1": disc.shortening,
        "K2": PinRing(n, disc.pin_circle_radius, disc.pin_radius, disc.pin_circle_radius).spacing,
        "ring_pitch": disc.eccentricity * n,
        "disc_pitch": disc.reference_radius,
        "tip": outline.r_max,
        "root": outline.r_min,
        "threshold": (n - 2) / (2 * n - 1),
        "undercut_limit": disc.undercut_limit,
        "undercut_phi": phase,
        "least_convex": radius - disc.pin_radius,
        "root_fillet": disc.pin_radius - float(path.curvature_radius(np.asarray(0.0))),
        "inflection": degrees(brentq(bend, 0, 1.5)),
        "quiet_phi": degrees(np.arccos(path.shortening)),
        "pin_gap": 2 * (disc.pin_circle_radius * sin(pi / n) - disc.pin_radius),
        "area": area,
        "perimeter": round_about,
        "ratio": ring_held(disc.lobes),
    }
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_geometry", "two-tooth disc"))
def test_disc_of_two_teeth_difference(given, expected):
    disc = CycloidDisc(**given)
    outline = disc.outline
    ratio = ring_held(disc.lobes, disc.difference)
    computed = {"k1": disc.shortening, "ratio": ratio, "root": outline.r_min, "tip": outline.r_max}
    assert misses(expected, computed | {"area": outline.area}) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_geometry", "profile point"))
def test_profile_point(given, expected):
    disc = CycloidDisc(**{k: v for k, v in given.items() if k != "t_deg"})
    flank = disc.outline.pieces[-1].curve
    phase = np.asarray(radians(given["t_deg"]) * disc.lobes)
    point, normal = complex(flank.point(phase)), complex(1j * flank.tangent(phase))
    assert misses(expected, {"x": point.real, "y": point.imag, "nx": normal.real, "ny": normal.imag}) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_geometry", "lobed ring"))
def test_ring_outside_the_pins(given, expected):
    ring = LobedRing(**given)
    outline = ring.outline
    phase, radius = sharpest(ring.path, -1)
    computed = {
        "k": ring.shortening,
        "tip": outline.r_min,
        "root": outline.r_max,
        "undercut_limit": ring.undercut_limit,
        "undercut_phi": phase,
        "margin": radius - ring.pin_radius,
        "area": -outline.area,
        "perimeter": perimeter(outline),
        "ratio": ring_held(ring.pins),
    }
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_geometry", "two stages"))
def test_two_stages(given, expected):
    computed = {"ratio": two_stage_ring_held(**given), "ring": two_stage_carrier_held(**given)}
    assert misses(expected, computed) == []


def test_holding_the_disc_gives_one_more_than_holding_the_ring():
    assert (ring_held(39), disc_held(40)) == (-39, 40)
    assert (ring_held(24, 2), disc_held(26, 2)) == (-12, 13)


def reducer(discs, lobes, rollers):
    """Roomy reducer of any counts, for the drilling of its discs only."""
    pins, circle = lobes + 1, 100.0
    return PinWheelReducer(
        CycloidDisc(lobes, 0.5, circle, 2.0),
        PinRing(pins, circle, 1.0, circle),
        OutputRollers(rollers, 60.0, 1.0),
        Stack(5.0, 1.0, 5.0),
        Bore(20.0),
        Bore(20.0),
        220.0,
        discs,
    )


def fits_by_trial(discs, lobes, rollers):
    """Whether turning each disc by whole lobes can bring its holes to those of the first: every turn tried."""
    whole = discs * lobes * rollers
    lag = [(q * rollers + j * discs * rollers) % (discs * lobes) for q in range(discs) for j in range(lobes)]
    assert whole > 0
    return all(0 in lag[q * lobes : (q + 1) * lobes] for q in range(discs))


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_discs", "identical discs"))
def test_identical_discs(given, expected):
    assert misses(expected, {"identical": reducer(**given).identical_discs}) == []


@pytest.mark.parametrize("discs", [2, 3])
def test_identical_discs_are_told_by_the_prime_factors(discs):
    """Rule v(rollers) >= 1 + v(lobes), v the exponent of the disc count (a prime); derived."""

    def exponent(x):
        return 0 if x % discs else 1 + exponent(x // discs)

    for lobes in (5, 6, 8, 9, 12, 16, 18, 27, 29, 39):
        for rollers in range(3, 17):
            rule = exponent(rollers) >= 1 + exponent(lobes)
            assert fits_by_trial(discs, lobes, rollers) == rule
            assert reducer(discs, lobes, rollers).identical_discs == rule, (lobes, rollers)


def rolled(disc):
    """Roll test of a disc in the ring pins it was made for."""
    ring = PinRing(disc.pins, disc.pin_circle_radius, disc.pin_radius, disc.pin_circle_radius)
    motion = Motion(disc.eccentricity, 0.0, 1.0, 0.0, -disc.difference / disc.lobes)
    (contact,) = roll_engagements([engage("ring pins", ring.pattern, Motion(), "disc", disc.outline, motion)]).contacts
    return contact


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_play", "play"))
def test_formula_of_play(given, expected):
    assert misses(only(expected, "formula"), {"formula": ARCSEC * CycloidDisc(**given).play_deg}) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_play", "play"))
def test_play_by_the_roll_test(given, expected):
    contact = rolled(CycloidDisc(**given))
    assert misses(only(expected, "least"), {"least": ARCSEC * contact.play_angle}) == []
    assert misplaced(expected, "", ARCSEC * contact.plays, 1.5e-3) is None


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_play", "sensitivity"))
def test_sensitivity_of_play(given, expected):
    disc, small = CycloidDisc(**given), 0.001
    computed = {
        "equidistant": ARCSEC * replace(disc, equidistant=small).play_deg,
        "moved_distance": ARCSEC * replace(disc, moved_distance=-small).play_deg,
        "tangential": ARCSEC * PinErrors(tangential=small).play_deg(disc),
    }
    assert 2 * PinErrors(pin_radius=-small).play_deg(disc) * ARCSEC == pytest.approx(computed["equidistant"])
    assert 2 * PinErrors(ring_radius=small).play_deg(disc) * ARCSEC == pytest.approx(computed["moved_distance"])
    assert PinErrors(eccentricity=small).play_deg(disc) == pytest.approx(0, abs=1e-12)
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_play", "no play"))
def test_clearance_at_tip_and_root_without_play(given, expected):
    disc = CycloidDisc(**given)
    equidistant = given["moved_distance"] * sqrt(1 - disc.exact_path.shortening**2)
    disc = replace(disc, equidistant=equidistant)
    assert misses(expected, {"equidistant": equidistant, "clearance": disc.radial_clearance}) == []
    assert disc.play_deg == pytest.approx(0, abs=1e-15)


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_play", "arc minutes"))
def test_play_of_a_printed_disc(given, expected):
    assert misses(expected, {"play": 60 * CycloidDisc(**given).play_deg}) == []


def lever_law(given):
    sizes = {k: v for k, v in given.items() if k in ("lobes", "eccentricity", "pin_circle_radius", "pin_radius")}
    return LeverLaw(CycloidDisc(**sizes), given["torque"])


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_forces", "pin forces"))
def test_pin_forces(given, expected):
    law, width = lever_law(given), given["width"]
    disc = law.disc
    cranks = np.linspace(0, 360 / disc.pins, 1501)
    loads = [law.loads(a) for a in cranks]
    force = np.array([load.force.max() for load in loads])
    stress = np.array([law.stresses(load, width, STEEL).max() for load in loads])
    push = np.array([law.resultant(a) for a in cranks])
    quiet = disc.path.curvature_radius(np.arccos(disc.shortening)) - disc.pin_radius
    worst, phase = law.worst_stress(width, STEEL)
    assert -push.imag == pytest.approx(law.force_across, rel=1e-12)
    computed = {
        "largest_force": law.largest_force,
        "across": law.force_across,
        "along": law.force_along,
        "hertz": contact_stress(law.largest_force, width, disc.pin_radius, quiet, STEEL),
        "worst": worst,
        "worst_phi": phase,
    }
    bands = {"force": force, "along": push.real, "worst": stress}
    assert misses(only(expected, *computed), computed) == []
    assert [misplaced(expected, name, found, 1e-4) for name, found in bands.items()] == [None] * 3


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_forces", "pin load"))
def test_pin_load(given, expected):
    law, j = lever_law(given), given["pin"]
    loads = law.loads(0.0)
    computed = {
        "force": loads.force[j],
        "lever": loads.lever[j],
        "x": loads.contact[j].real,
        "y": loads.contact[j].imag,
        "radius": loads.curvature_radius[j],
        "scale": loads.force[j] * law.longest_lever / loads.lever[j],
    }
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_forces", "roller forces"))
def test_roller_forces(given, expected):
    largest = roller_force(given["torque"], given["rollers"], given["circle_radius"])
    computed = {
        "largest": largest,
        "least": largest * cos(pi / given["rollers"]),
        "sum": roller_force_sum(given["torque"], given["circle_radius"]),
    }
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_forces", "ring pin loss"))
def test_ring_pin_loss(given, expected):
    friction = given["friction"]
    disc = CycloidDisc(**{k: v for k, v in given.items() if k != "friction"})
    assert misses(expected, {"loss": ring_pin_loss(disc, friction)}) == []


@pytest.mark.parametrize(("given", "expected"), cases("cycloid_forces", "reduced modulus"))
def test_reduced_modulus(given, expected):
    both = (given["modulus"], given["poisson"])
    assert misses(expected, {"modulus": reduced_modulus(*both, *both)}) == []


def test_every_kind_of_case_is_tried():
    assert kinds("cycloid_geometry") == {"disc", "two-tooth disc", "profile point", "lobed ring", "two stages"}
    assert kinds("cycloid_discs") == {"identical discs"}
    assert kinds("cycloid_play") == {"play", "sensitivity", "no play", "arc minutes"}
    assert kinds("cycloid_forces") == {"pin forces", "pin load", "roller forces", "ring pin loss", "reduced modulus"}
