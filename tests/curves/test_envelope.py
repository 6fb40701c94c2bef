"""Envelopes: known mates of known flanks, the law of gearing itself, and where there is no contact."""

from math import pi

import numpy as np
import pytest
from curve_specimens import epicycloid, hypocycloid, involute, rack_flank
from hypothesis import given
from hypothesis import strategies as st

from gearsolid.curves.curve import Section, Turned
from gearsolid.curves.envelope import Envelope
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc, Ellipse, Segment
from gearsolid.curves.rolling import CircleOnCircle, CircleOnLine, LineOnCircle, Rolling
from gearsolid.curves.roulette import Trace

branches = pytest.mark.parametrize("branch", [1, -1])


def pole(motion: Rolling, roll: np.ndarray) -> np.ndarray:
    """Pitch point in the carried frame."""
    return -1j * roll if isinstance(motion, LineOnCircle) else -motion.carried * np.exp(-1j * roll)


def law_of_gearing_error(envelope: Envelope, t: np.ndarray, late: float = 0.0) -> np.ndarray:
    """Distance of the pitch point from the common normal [mm]; the roll taken `late` breaks it."""
    motion, roll = envelope.motion, envelope.roll(t) + late
    normal_to = motion.turn(roll) * envelope.carried.tangent(t)
    ray = motion.place(envelope.carried.point(t), roll) - motion.place(pole(motion, roll), roll)
    return np.abs(np.real(ray * np.conj(normal_to)))


MOTIONS = {
    "circle outside": CircleOnCircle(7, 3),
    "circle inside": CircleOnCircle(7, -3),
    "ring around": CircleOnCircle(7, -12),
    "circle on line": CircleOnLine(3),
    "circle under line": CircleOnLine(-3),
    "line on circle": LineOnCircle(5),
}


@branches
@pytest.mark.parametrize("motion", MOTIONS.values(), ids=MOTIONS)
def test_normal_at_contact_passes_through_the_pitch_point(motion, branch):
    carried = Ellipse(2, 1, 0.1, 6, 0.4 - 0.7j)
    envelope = Envelope(carried, motion, branch)
    t = carried.sample(60)
    t = t[envelope.touches(t)]
    assert len(t) > 20
    assert law_of_gearing_error(envelope, t).max() < 1e-9
    assert np.median(law_of_gearing_error(envelope, t, late=0.01)) > 1e-4
    # The envelope touches the carried curve: same direction at the contact.
    pace = envelope.derivative(t) / envelope.side(t)
    assert np.abs(pace.imag).max() < 1e-9 * np.abs(pace).max()
    assert np.abs(envelope.tangent(t) / envelope.side(t)).max() == pytest.approx(1)


def test_the_two_branches_are_the_two_contacts():
    carried, motion = Ellipse(2, 1, 0.1, 6, 0.4 - 0.7j), CircleOnCircle(7, 3)
    t = carried.sample(30)
    gap = np.abs(np.exp(1j * Envelope(carried, motion, 1).roll(t)) - np.exp(1j * Envelope(carried, motion, -1).roll(t)))
    assert np.nanmin(gap) > 0.1


@pytest.mark.parametrize("angle", [14.5, 20, 25, 30])
def test_rack_flank_makes_an_involute(angle):
    pressure = np.radians(angle)
    envelope = Envelope(rack_flank(pressure, 1.0), LineOnCircle(20))
    t = envelope.sample(50)
    z, base = envelope.point(t), 20 * np.cos(pressure)
    lean = np.arccos(base / np.abs(z))
    spread = np.angle(z) - (np.tan(lean) - lean)
    assert spread == pytest.approx(-(np.tan(pressure) - pressure), abs=1e-13)
    # Its normals touch the base circle.
    assert np.abs(np.real(z * np.conj(envelope.tangent(t)))) == pytest.approx(base, abs=1e-12)


def test_involute_pinion_cuts_an_involute_ring():
    """Circle inside circle: the mate of an involute of base r cos(a) is one of base R cos(a)."""
    pressure, inner, ring = np.radians(20), 10.0, 25.0
    flank = involute(inner * np.cos(pressure), 0.2, 0.6)
    envelope = Envelope(flank, CircleOnCircle(ring, -inner), -1)
    t = envelope.sample(40)
    assert envelope.touches(t).all()
    base = np.abs(np.real(envelope.point(t) * np.conj(envelope.tangent(t))))
    assert base == pytest.approx(ring * np.cos(pressure), abs=1e-10)


@pytest.mark.parametrize(("wheel", "pinion", "a"), [(32, 8, 2), (32, 4, 2), (20, 9, 2.5), (15, 15, 6)])
def test_mate_of_an_epicycloid_is_the_hypocycloid_of_the_same_circle(wheel, pinion, a):
    face = Turned(epicycloid(wheel, a, 1.5), -1)
    envelope = Envelope(face, CircleOnCircle(pinion, wheel), -1)
    flank = Trace(CircleOnCircle(pinion, -a), a, 0, 2)
    # Both touch the describing circle in the same point: equal rolls of it.
    roll = envelope.sample(60)
    assert np.abs(envelope.point(roll) - flank.point(roll)).max() < 1e-12 * wheel
    assert np.abs(envelope.roll(roll) + a * roll / wheel).max() < 3e-8
    assert np.abs(envelope.derivative(roll) - flank.derivative(roll)).max() < 1e-9
    assert envelope.start == pytest.approx(pinion, abs=1e-12)


@pytest.mark.parametrize(("wheel", "pinion", "a"), [(32, 8, 2), (20, 9, 2.5)])
def test_mate_of_a_hypocycloid_is_the_epicycloid_of_the_same_circle(wheel, pinion, a):
    flank = Turned(hypocycloid(wheel, a, 1.2), -1)
    envelope = Envelope(flank, CircleOnCircle(pinion, wheel), 1)
    roll = envelope.sample(60)
    assert np.abs(envelope.point(roll) - epicycloid(pinion, a, 2).point(roll)).max() < 1e-11 * wheel


@branches
@pytest.mark.parametrize(
    ("fixed", "carried", "pin_circle", "pin"),
    [(9, -10, 12.0, 1.0), (9, -10, 10.0, 0.7), (12, 4, 4.0, 0.5), (12, 4, 3.0, 0.8), (12, -5, 5.5, 0.6)],
    ids=["pin-wheel reducer", "unshortened", "lantern pinion", "pins inside the pitch circle", "pins in a ring"],
)
def test_pins_two_ways(fixed, carried, pin_circle, pin, branch):
    """A pin carried round leaves the parallel, at its radius, of the path of its centre."""
    motion, centre = CircleOnCircle(fixed, carried), pin_circle * np.exp(0.3j)
    envelope = Envelope(Arc(centre, pin, 0, 2 * pi), motion, branch)
    t = envelope.sample(80)
    t = t[envelope.touches(t)]
    roll = envelope.roll(t)
    # A pin centred on the pitch circle rests while it is the pitch point, and touches nothing there.
    moving = np.abs(motion.velocity(centre, roll)) > 1e-6
    t, roll = t[moving], roll[moving]
    assert len(t) > 20
    path = Trace(motion, centre, -pi - 1e-9, pi + 1e-9)
    both = np.stack([np.abs(envelope.point(t) - Parallel(path, side * pin).point(roll)) for side in (1, -1)])
    assert both.min(axis=0).max() < 1e-10
    assert np.abs(np.abs(envelope.point(t) - path.point(roll)) - pin).max() < 1e-12
    assert both.max(axis=0).max() > pin


def test_pin_at_the_wrong_radius_is_seen():
    motion = CircleOnCircle(9, -10)
    envelope, path = Envelope(Arc(12, 1.001, -1, 1), motion), Trace(motion, 12, -4, 4)
    t = envelope.sample(20)
    t = t[envelope.touches(t)]
    both = [np.abs(envelope.point(t) - Parallel(path, side).point(envelope.roll(t))) for side in (1, -1)]
    assert np.min(both, axis=0).min() > 9e-4


@branches
def test_points_that_never_touch(branch):
    """The normal of the line x = 0 misses the pitch circle of 3 mm farther than that from its centre."""
    envelope = Envelope(Segment(-5j, 5j), CircleOnCircle(8, 3), branch)
    t = envelope.sample(101)
    h = 10 * t - 5
    assert np.array_equal(envelope.touches(t), np.abs(h) <= 3 + 1e-12)
    assert np.array_equal(np.isnan(envelope.point(t)), ~envelope.touches(t))
    assert np.isnan(envelope.derivative(t)[~envelope.touches(t)]).all()
    # A line parallel to the pitch line never touches; inside a circle's reach it does.
    level = Envelope(Segment(1, 2), LineOnCircle(5))
    assert not level.touches(level.sample(5)).any()


@given(st.floats(-pi, pi), st.floats(1, 50), st.floats(1, 50))
def test_contact_at_the_pitch_point_is_never_lost_by_rounding(turn, wheel, pinion):
    factor = complex(np.exp(1j * turn))
    face = Turned(epicycloid(wheel, 1.0, 1.0), factor)
    envelope = Envelope(face, CircleOnCircle(pinion, wheel), -1)
    assert abs(envelope.start) == pytest.approx(pinion, rel=1e-7)
    assert np.isfinite(envelope.tangent(np.array([0.0, 1e-12, 1e-9, 1e-6]))).all()


def test_direction_of_an_envelope_that_runs_back():
    """Where the envelope has a cusp its direction flips against the carried curve's, its side does not."""
    envelope = Envelope(Arc(12, 4.0, pi / 2, 3 * pi / 2), CircleOnCircle(9, -10))
    t = envelope.sample(2001)
    t = t[envelope.touches(t)]
    pace = np.real(envelope.derivative(t) * np.conj(envelope.side(t)))
    flips = np.flatnonzero(pace[1:] * pace[:-1] < 0)
    assert len(flips) > 0
    sides = envelope.side(t)
    assert np.abs(sides[flips + 1] - sides[flips]).max() < 0.1
    tangents = envelope.tangent(t)
    assert np.abs(tangents[flips + 1] + tangents[flips]).max() < 0.1


def test_section_of_the_carried_curve_is_section_of_the_envelope():
    motion, face = CircleOnCircle(8, 32), Turned(epicycloid(32, 2, 1.5), -1)
    part = Envelope(Section(face, 0.5, 1.0), motion, -1)
    t = part.sample(9)
    assert np.array_equal(part.point(t), Envelope(face, motion, -1).point(t))
    assert np.allclose(part.derivative(t), Envelope(face, motion, -1).derivative(t), rtol=1e-12)
