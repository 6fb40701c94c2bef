import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from involute_shapes import pinion_tool, polygon
from shapely.geometry import MultiPoint

from gearsolid.errors import DesignError
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_relations import active_radius, centre_distance, inv, working_angle
from gearsolid.teeth.pinion_cutter import PinionCutter
from gearsolid.teeth.rack import ISO53_D, BasicRack
from gearsolid.teeth.ring_margins import ring_margins

SPECIMENS = {
    "plain 60": InternalGear(60, 2),
    "small 36": InternalGear(36, 1),
    "outward shift 24": InternalGear(24, 3, profile_shift=-0.5),
    "inward shift 72": InternalGear(72, 2, profile_shift=0.3),
    "shifted cutter 60": InternalGear(60, 3, profile_shift=-0.3, cutter=PinionCutter(18, 0.1, 0.25)),
    "thinned 50": InternalGear(50, 1.5, tooth_thinning=0.1, tip_shortening=0.1),
    "deep 45": InternalGear(45, 2, rack=ISO53_D),
    "25 deg 40": InternalGear(40, 2, 25.0),
    "helical 51": InternalGear(51, 2, helix_angle_deg=20),
}


@pytest.fixture(params=SPECIMENS.values(), ids=SPECIMENS)
def ring(request):
    return request.param


def curve(ring, role):
    return next(p.curve for p in ring.outline.pieces if p.role == role)


def test_flank_is_the_closed_form_involute(ring):
    flank = curve(ring, "flank")
    z = flank.point(flank.sample(101))
    angle = np.arccos(np.minimum(1, ring.base_radius / np.abs(z)))
    half = ring.thickness / (2 * ring.reference_radius) + inv(angle) - inv(ring.transverse_angle)
    assert np.max(np.abs(z - np.abs(z) * np.exp(1j * half))) < 1e-10


def test_outline_is_one_simple_hole_within_its_circles(ring):
    shape = polygon(ring.outline, 120)
    assert shape.is_valid
    assert not shape.exterior.is_ccw
    assert ring.outline.r_min == pytest.approx(ring.tip_radius, rel=1e-12)
    assert ring.outline.r_max == pytest.approx(ring.root_radius, rel=1e-12)
    assert -ring.outline.area == pytest.approx(shape.area, rel=2e-4)


def test_pieces_run_into_each_other_smoothly_below_the_tip(ring):
    fillet, flank = curve(ring, "fillet"), curve(ring, "flank")
    assert abs(np.angle(flank.tangent(np.asarray(flank.span[0])) / fillet.tangent(np.asarray(fillet.span[1])))) < 1e-6
    along = fillet.tangent(np.asarray(fillet.span[0])) / (-1j * fillet.start / abs(fillet.start))
    assert abs(np.angle(along)) < 1e-6


def test_flank_ends_at_the_form_circle(ring):
    flank = curve(ring, "flank")
    assert abs(flank.start) == pytest.approx(ring.form_radius, rel=1e-12)
    assert abs(flank.end) == pytest.approx(ring.tip_radius, rel=1e-12)
    assert ring.tip_radius < ring.form_radius < ring.root_radius


def swept(ring, thickening=0.0, count=801):
    """Cutter tooth at many rolls in the ring's frame, the cut space centred on the angle pi / teeth."""
    tool, a = ring.tool, np.radians(ring.pressure_angle_deg)
    points = pinion_tool(
        teeth=tool.teeth,
        module=ring.module,
        angle_deg=ring.pressure_angle_deg,
        shift=tool.profile_shift,
        addendum=tool.addendum,
        rounding=tool.tip_rounding,
        thickening=ring.tooth_thinning + thickening,
    )
    distance = -centre_distance(tool.teeth, -ring.teeth, tool.profile_shift + ring.profile_shift, a, module=ring.module)
    turn = np.linspace(-1, 1, count) * 1.0
    orbit = -turn * tool.teeth / (ring.teeth - tool.teeth)
    z = distance * np.exp(1j * orbit)[:, None] + points * np.exp(1j * turn)[:, None]
    return z * np.exp(1j * np.pi / ring.teeth)


STRAIGHT = {name: ring for name, ring in SPECIMENS.items() if ring.helix_angle_deg == 0}


@pytest.mark.parametrize("ring", STRAIGHT.values(), ids=STRAIGHT)
def test_swept_cutter_leaves_exactly_this_outline(ring):
    """The cutter, moved step by step, stays inside the hole and comes close to every point of a tooth space."""
    z = swept(ring)
    z = z[np.abs(z) > ring.tip_radius * 0.99]
    hole = polygon(ring.outline, 120).buffer(4e-4 * ring.module)
    points = MultiPoint(np.column_stack([z.real, z.imag]))
    assert points.difference(hole).is_empty
    for c in [p.curve for p in ring.outline.pieces if p.role in ("fillet", "flank")][:2]:
        edge = c.point(c.sample(9))
        assert np.max(np.min(np.abs(edge[:, None] - z), axis=1)) < 6e-3 * ring.module


def test_sweep_check_sees_a_cutter_that_is_too_thick():
    ring = InternalGear(60, 2)
    z = swept(ring, thickening=0.02, count=301).ravel()
    hole = polygon(ring.outline, 120).buffer(4e-4 * ring.module)
    assert not MultiPoint(np.column_stack([z.real, z.imag])).difference(hole).is_empty


def test_positive_shift_thickens_the_tooth_and_moves_it_to_the_axis():
    plain, shifted = InternalGear(72, 2), InternalGear(72, 2, profile_shift=0.2)
    assert shifted.tip_radius == pytest.approx(plain.tip_radius - 0.4)
    assert shifted.thickness > plain.thickness
    assert shifted.root_radius < plain.root_radius


def test_thinning_takes_the_arc_off_the_tooth_and_leaves_the_root():
    full, thin = InternalGear(60, 2), InternalGear(60, 2, tooth_thinning=0.1)
    r = full.reference_radius
    assert full.thickness_at(r) - thin.thickness_at(r) == pytest.approx(0.1, abs=1e-12)
    assert thin.root_radius == pytest.approx(full.root_radius, rel=1e-12)


@pytest.mark.parametrize(
    ("teeth", "planet"), [(z, p) for z in (36, 48, 60, 72, 100) for p in (12, 17, 24, 30, 40) if p <= z - 12]
)
def test_usual_ring_leaves_its_planet_free_of_the_fillet(teeth, planet):
    """The planet's tip touches the ring no further out than the involute reaches."""
    ring, mate, a = InternalGear(teeth, 1), InvoluteGear(planet, 1), np.radians(20)
    used = active_radius(
        tip=mate.tip_radius,
        base=mate.base_radius,
        own_base=-ring.base_radius,
        distance=centre_distance(planet, -teeth, 0, a, module=1),
        working=working_angle(planet, -teeth, 0, a),
    )
    assert used <= ring.form_radius


@pytest.mark.parametrize("shift", [-0.5, -0.2, 0.0, 0.3])
def test_usual_cutter_reaches_the_root_of_the_basic_rack(shift):
    ring = InternalGear(60, 2, profile_shift=shift)
    assert ring.root_radius == pytest.approx(60 + 2 * (1.25 - shift), rel=1e-12)


def test_usual_cutter_is_the_largest_that_feeds_radially():
    ring = InternalGear(80, 1)
    assert ring.margins.trimming >= 0
    assert InternalGear(80, 1, cutter=PinionCutter(ring.tool.teeth + 1)).margins.trimming < 0


def test_least_teeth_of_an_unshifted_full_depth_ring():
    """z >= 2 / (1 - cos 20 deg) = 33.16 keeps the tip outside the base circle."""
    with pytest.raises(DesignError, match="take 34 teeth"):
        InternalGear(33, 1, cutter=PinionCutter(16))
    tip_free = BasicRack(0.9)
    assert InternalGear(33, 1, rack=tip_free).tip_radius > InternalGear(33, 1, rack=tip_free).base_radius


@pytest.mark.parametrize(
    ("numbers", "words"),
    [
        ({"teeth": 30, "module": 2}, "shorten the tip by 0.19"),
        ({"teeth": 60, "module": 2, "cutter": PinionCutter(20)}, "falls 0.074.* mm short"),
        ({"teeth": 60, "module": 2, "cutter": PinionCutter(60)}, "must have fewer"),
        ({"teeth": 60, "module": 2, "cutter": PinionCutter(57)}, "cuts into the tips"),
        ({"teeth": 60, "module": 2, "cutter": PinionCutter(30, 0.0, 0.6)}, "rounding of 1.2 mm"),
        ({"teeth": 60, "module": 2, "tooth_thinning": 3.2}, "tooth thickness"),
        ({"teeth": 60, "module": 2, "profile_shift": 0.3, "cutter": PinionCutter(24, 0.9)}, "must stay below"),
    ],
    ids=["tip in base circle", "cutter too small", "cutter as large", "cutter too large", "rounding", "thin", "shifts"],
)
def test_refusals_name_the_number_and_the_limit(numbers, words):
    with pytest.raises(DesignError, match=words):
        InternalGear(**numbers)


def test_cutters_that_make_no_sense_are_refused():
    with pytest.raises(DesignError, match="2 teeth"):
        PinionCutter(2)
    with pytest.raises(DesignError, match="rounding is 0"):
        PinionCutter(20, 0.0, 0.0)
    with pytest.raises(DesignError, match="addendum is -1"):
        PinionCutter(20, addendum=-1)


def test_trochoid_margin_is_infinite_where_tip_circles_do_not_cross():
    common = {"teeth": (20, 60), "base": (9.0, 28.0), "distance": 20.0, "working": 0.35}
    assert ring_margins(tip=(9.5, 29.9), **common).trochoid == np.inf
    assert ring_margins(tip=(51.0, 29.9), **common).trochoid == -np.inf


@settings(max_examples=40, deadline=None)
@given(
    teeth=st.integers(12, 160),
    module=st.floats(0.1, 20),
    angle=st.floats(14.5, 30),
    shift=st.floats(-1, 0.6),
    thinning=st.floats(0, 0.1),
    shortening=st.floats(0, 0.3),
)
@example(teeth=34, module=1, angle=20, shift=0, thinning=0, shortening=0)
def test_every_ring_is_a_simple_closed_outline_or_a_refusal_with_numbers(
    *, teeth, module, angle, shift, thinning, shortening
):
    try:
        ring = InternalGear(
            teeth, module, angle, shift, tooth_thinning=thinning * module, tip_shortening=shortening * module
        )
        outline = ring.outline
    except DesignError as refusal:
        assert any(c.isdigit() for c in str(refusal))
        return
    assert ring.tip_radius < ring.form_radius < ring.root_radius
    assert polygon(outline, 24).is_valid
    flank = curve(ring, "flank")
    assert max(abs(np.angle(w) - ring.half_angle_at(abs(w))) for w in flank.point(flank.sample(9))) < 1e-9
