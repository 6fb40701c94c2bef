import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from involute_shapes import polygon, rack_tool
from shapely.geometry import MultiPoint, Point

from gearsolid.errors import DesignError
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_relations import inv, inverse_inv
from gearsolid.teeth.rack import ISO53_A, ISO53_B, ISO53_C, ISO53_D, BasicRack

SPECIMENS = {
    "plain 20": InvoluteGear(20, 1),
    "undercut 10": InvoluteGear(10, 1),
    "deeply undercut 7": InvoluteGear(7, 2),
    "shifted 12": InvoluteGear(12, 3, profile_shift=0.6),
    "negative shift 40": InvoluteGear(40, 2, profile_shift=-0.4, rack=ISO53_D),
    "helical 23": InvoluteGear(23, 2, helix_angle_deg=25, profile_shift=0.1),
    "helical undercut 9": InvoluteGear(9, 2, helix_angle_deg=15, rack=ISO53_C),
    "thinned 18": InvoluteGear(18, 1.5, tooth_thinning=0.12, tip_shortening=0.2),
    "25 deg 15": InvoluteGear(15, 2, 25.0, rack=BasicRack(1, 1.25, 0.2)),
    "rounding above the pitch line 30": InvoluteGear(30, 1, profile_shift=1.1, tip_shortening=0.2),
}


@pytest.fixture(params=SPECIMENS.values(), ids=SPECIMENS)
def gear(request):
    return request.param


def curve(gear, role):
    return next(p.curve for p in gear.outline.pieces if p.role == role)


def test_flank_is_the_closed_form_involute(gear):
    flank = curve(gear, "flank")
    z = flank.point(flank.sample(101))
    angle = np.arccos(gear.base_radius / np.abs(z))
    half = gear.thickness / (2 * gear.reference_radius) + inv(gear.transverse_angle) - inv(angle)
    assert np.max(np.abs(z - np.abs(z) * np.exp(-1j * half))) < 1e-10


def test_flank_normal_touches_the_base_circle(gear):
    flank = curve(gear, "flank")
    t = flank.sample(33)[1:]
    assert np.allclose(np.abs(np.real(flank.point(t) * np.conj(flank.tangent(t)))), gear.base_radius, rtol=1e-9)


def test_outline_is_one_simple_wheel_within_its_circles(gear):
    shape = polygon(gear.outline, 120)
    assert shape.is_valid
    assert shape.exterior.is_ccw
    assert gear.outline.r_max == pytest.approx(gear.tip_radius, rel=1e-12)
    assert gear.outline.r_min == pytest.approx(gear.root_radius, rel=1e-12)
    assert gear.outline.area == pytest.approx(shape.area, rel=2e-4)


def test_fillet_meets_root_circle_tangentially(gear):
    fillet = curve(gear, "fillet")
    assert abs(fillet.start) == pytest.approx(gear.root_radius, rel=1e-12)
    along = fillet.tangent(np.asarray(fillet.span[0])) / (1j * fillet.start / abs(fillet.start))
    assert abs(along - 1) < 1e-7


def test_fillet_runs_into_the_involute_tangentially_unless_undercut(gear):
    fillet, flank = curve(gear, "fillet"), curve(gear, "flank")
    turn = np.angle(flank.tangent(np.asarray(flank.span[0])) / fillet.tangent(np.asarray(fillet.span[1])))
    if gear.undercut:
        assert turn > 0.01, "at an undercut the outline turns a corner that sticks out"
    else:
        assert abs(turn) < 1e-7


def swept(gear, rolls):
    """Points of one rack tooth at every roll, in the gear's frame, tooth space centred on the angle pi / teeth."""
    tool = rack_tool(
        module=gear.module,
        angle_deg=gear.pressure_angle_deg,
        shift=gear.profile_shift,
        dedendum=gear.rack.dedendum,
        rounding=gear.rack.root_radius,
        helix_deg=gear.helix_angle_deg,
        thinning=gear.tooth_thinning,
    )
    r = gear.reference_radius
    turn = np.exp(-1j * rolls / r + 1j * np.pi / gear.teeth)[:, None]
    return (r + tool[None, :] + 1j * rolls[:, None]) * turn


def test_swept_rack_leaves_exactly_this_outline(gear):
    """The rack, moved step by step, never enters the material and comes close to every point of the tooth space."""
    rolls = np.linspace(-1, 1, 501) * 1.6 * gear.pitch
    z = swept(gear, rolls)
    z = z[np.abs(z) < gear.tip_radius * 1.01]
    shape = polygon(gear.outline, 120)
    inside = shape.buffer(-3e-4 * gear.module)
    points = MultiPoint(np.column_stack([z.real, z.imag]))
    assert points.intersection(inside).is_empty
    upper = [p.curve for p in gear.outline.pieces if p.role in ("fillet", "flank")][2:]
    for c in upper:
        edge = c.point(c.sample(9))
        gaps = np.min(np.abs(edge[:, None] - z[None, :]), axis=1)
        assert np.max(gaps) < 4e-3 * gear.module


def test_sweep_check_sees_a_tooth_that_is_too_thick():
    """The check above is itself checked: a rack for a thinner tooth must enter the material of a full one."""
    gear = InvoluteGear(20, 1)
    z = swept(InvoluteGear(20, 1, tooth_thinning=0.02), np.linspace(-1, 1, 251) * 1.6 * gear.pitch)
    inside = polygon(gear.outline, 120).buffer(-3e-4)
    assert any(inside.contains(Point(w.real, w.imag)) for w in z.ravel()[::7])


@pytest.mark.parametrize(
    ("rack", "limit"),
    [(ISO53_A, 17.097), (ISO53_B, 17.997), (ISO53_C, 18.559), (ISO53_D, 19.549)],
    ids=["A", "B", "C", "D"],
)
def test_undercut_starts_below_the_tooth_count_of_each_iso53_rack(rack, limit):
    """Limits: own evaluation of z = 2 hFf* / sin^2 a (ISO 21771)."""
    least = 2 * rack.straight_dedendum(20) / np.sin(np.radians(20)) ** 2
    assert least == pytest.approx(limit, abs=1.1e-3)
    below, above = InvoluteGear(int(limit), 2, rack=rack), InvoluteGear(int(limit) + 1, 2, rack=rack)
    assert below.undercut > 0 == above.undercut
    assert below.least_shift > 0 > above.least_shift


def test_undercut_vanishes_at_the_least_shift():
    gear = InvoluteGear(10, 3)
    exact = InvoluteGear(10, 3, profile_shift=gear.least_shift)
    assert exact.undercut == pytest.approx(0, abs=1e-12)
    assert exact.form_radius == pytest.approx(gear.base_radius, rel=1e-9)


@pytest.mark.parametrize("lack", [1e-1, 1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-8, 1e-10, 1e-12])
def test_slight_undercut_is_drawn_closed(lack):
    gear = InvoluteGear(12, 1, profile_shift=InvoluteGear(12, 1).least_shift - lack)
    assert gear.undercut == pytest.approx(lack, rel=1e-3)
    assert polygon(gear.outline).is_valid
    assert gear.base_radius * (1 - 1e-9) <= gear.form_radius < gear.base_radius + lack


def test_undercut_crossing_lies_on_fillet_and_involute():
    gear = InvoluteGear(8, 1)
    fillet = curve(gear, "fillet")
    radius = abs(fillet.end)
    assert radius > gear.base_radius
    half = gear.half_angle_at(gear.base_radius) - inv(np.arccos(gear.base_radius / radius))
    assert np.angle(fillet.end) == pytest.approx(-half, abs=1e-12)


def test_thinning_takes_the_arc_off_the_tooth_and_leaves_the_root():
    full, thin = InvoluteGear(22, 2), InvoluteGear(22, 2, tooth_thinning=0.1)
    r = full.reference_radius
    assert full.thickness_at(r) - thin.thickness_at(r) == pytest.approx(0.1, abs=1e-12)
    assert thin.root_radius == full.root_radius
    assert thin.form_radius == full.form_radius


def test_drawn_thickness_is_the_computed_one():
    gear = InvoluteGear(22, 2, profile_shift=0.2)
    for radius in (gear.form_radius * 1.001, gear.reference_radius, gear.tip_radius * 0.999):
        ring = Point(0, 0).buffer(radius, 4096).exterior
        arcs = polygon(gear.outline, 400).intersection(ring).length
        assert arcs == pytest.approx(gear.teeth * gear.thickness_at(radius), rel=1e-4)


@pytest.mark.parametrize(
    ("numbers", "words"),
    [
        ({"teeth": 2, "module": 1}, "2 teeth"),
        ({"teeth": 12.5, "module": 1}, "whole number"),
        ({"teeth": 20, "module": 0}, "module is 0 mm"),
        ({"teeth": 20, "module": 1, "pressure_angle_deg": 50}, "50 deg"),
        ({"teeth": 20, "module": 1, "helix_angle_deg": 70}, "70 deg"),
        ({"teeth": 8, "module": 1, "profile_shift": 1.0}, "shorten the tip by more than 0.2355 mm"),
        ({"teeth": 20, "module": 1, "pressure_angle_deg": 25}, "at most 0.3"),
        ({"teeth": 20, "module": 1, "tooth_thinning": 1.6}, "tooth thickness"),
        ({"teeth": 20, "module": 1, "tooth_thinning": -0.2}, "no flat left below"),
        ({"teeth": 20, "module": 1, "tip_shortening": 2.0}, "beyond the base circle"),
        ({"teeth": 4, "module": 1, "profile_shift": -0.4}, "undercut cuts through"),
        ({"teeth": 3, "module": 1, "profile_shift": -0.5}, "root at radius -0.25 mm"),
        ({"teeth": 20, "module": 1, "profile_shift": float("nan")}, "must be a number"),
    ],
    ids=lambda v: v if isinstance(v, str) else "",
)
def test_refusals_name_the_number_and_the_limit(numbers, words):
    with pytest.raises(DesignError, match=words):
        InvoluteGear(**numbers)


def test_the_shortening_proposed_for_a_pointed_tooth_is_enough():
    with pytest.raises(DesignError, match="more than") as refusal:
        InvoluteGear(8, 1, profile_shift=1.0)
    proposed = float(str(refusal.value).split("more than ")[1].split()[0])
    assert InvoluteGear(8, 1, profile_shift=1.0, tip_shortening=proposed + 1e-3).tip_land > 0


@pytest.mark.parametrize(
    ("numbers", "words"),
    [((0, 1, 0.3), "addendum is 0"), ((1, 0.9, 0.3), "at least as large"), ((1, 1.25, 0), "root radius is 0")],
    ids=["no addendum", "shallow dedendum", "sharp root"],
)
def test_racks_that_make_no_sense_are_refused(numbers, words):
    with pytest.raises(DesignError, match=words):
        BasicRack(*numbers)


def test_full_root_radius_leaves_no_root_land():
    rack = BasicRack(1, 1.25, BasicRack().full_root_radius(20))
    gear = InvoluteGear(30, 2, rack=rack)
    assert [p.role for p in gear.outline.pieces] == ["fillet", "flank", "tip", "flank", "fillet"]
    assert polygon(gear.outline).is_valid


def test_inverse_involute_returns_the_angle():
    angle = np.radians(np.concatenate([[0, 0.1], np.linspace(1, 89, 400)]))
    back = inverse_inv(inv(angle))
    assert np.max(np.abs(back - angle)[1:] / angle[1:]) < 1e-9
    with pytest.raises(DesignError, match="at least 0"):
        inverse_inv(-0.01)


@settings(max_examples=80, deadline=None)
@given(
    teeth=st.integers(3, 200),
    module=st.floats(0.1, 20),
    angle=st.floats(14.5, 30),
    shift=st.floats(-1, 1.5),
    helix=st.floats(-35, 35),
    rounding=st.floats(0.05, 0.4),
    thinning=st.floats(0, 0.1),
    shortening=st.floats(0, 0.3),
)
@example(teeth=6, module=1, angle=20, shift=0, helix=0, rounding=0.38, thinning=0, shortening=0)
@example(teeth=17, module=1, angle=20, shift=0.0057, helix=0, rounding=0.38, thinning=0, shortening=0)
def test_every_gear_is_a_simple_closed_outline_or_a_refusal_with_numbers(
    *, teeth, module, angle, shift, helix, rounding, thinning, shortening
):
    try:
        gear = InvoluteGear(
            teeth, module, angle, shift, helix, BasicRack(1, 1.25, rounding), thinning * module, shortening * module
        )
        outline = gear.outline
    except DesignError as refusal:
        assert any(c.isdigit() for c in str(refusal))
        return
    assert gear.root_radius < gear.form_radius < gear.tip_radius
    assert polygon(outline, 24).is_valid
    flank = curve(gear, "flank")
    z = flank.point(flank.sample(9))
    half = [gear.half_angle_at(abs(w)) for w in z]
    assert np.max(np.abs(np.angle(z) + half)) < 1e-9
