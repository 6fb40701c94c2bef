"""Helical and double helical bodies: their faces against the exact helicoid, their files, and mates in their places."""

from dataclasses import replace
from math import cos, degrees, pi, radians, sin, tan
from pathlib import Path

import cadquery as cq
import numpy as np
import pytest
import trimesh
from hypothesis import given, settings
from hypothesis import strategies as st
from OCP.BRepAdaptor import BRepAdaptor_Surface

from gearsolid.contact.roll import roll_test
from gearsolid.curves.field import field_of
from gearsolid.curves.loops import disc, holes
from gearsolid.errors import DesignError, SolidError
from gearsolid.output.deviation import flank_deviation
from gearsolid.output.step import write_step
from gearsolid.output.stl import write_stl
from gearsolid.output.triangles import body_triangles
from gearsolid.pairs.blank import DOUBLE_HELICAL, Blank
from gearsolid.pairs.helix import member_body, twist_rate
from gearsolid.pairs.part import Body, Boss, Groove
from gearsolid.pairs.planetary import PlanetaryStage
from gearsolid.pairs.spur_pair import SpurPair
from gearsolid.recipe.read import read_recipe
from gearsolid.shop.bore import Bore
from gearsolid.solids.assembly import assembly, location
from gearsolid.solids.body import body_solid, build_solid
from gearsolid.solids.check import check_solid, exact_volume
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.tip_form import ChamferedTip, RoundedTip

pytestmark = pytest.mark.cad

RIGHT = InvoluteGear(20, 2, helix_angle_deg=20)
LEFT = InvoluteGear(20, 2, helix_angle_deg=-20)
RING = InternalGear(48, 2, helix_angle_deg=20)

HELICAL = {
    "right-hand, keyed chamfered bore": member_body(RIGHT, Blank(20, Bore.keyed(14, 0.5))),
    "left-hand on a height": member_body(LEFT, Blank(20, z=7.5)),
    "double, keyed bore": member_body(RIGHT, Blank(20, Bore.keyed(14), course=DOUBLE_HELICAL)),
    "double left-hand, hub, holes": replace(
        member_body(replace(LEFT, teeth=40), Blank(16, Bore(12), course=DOUBLE_HELICAL)),
        holes=(holes(5, 22, 5),),
        bosses=(Boss(disc(14), 6),),
    ),
    "undercut pinion, 45 deg": member_body(InvoluteGear(7, 1, helix_angle_deg=45, profile_shift=0.1), Blank(8)),
    "chamfered tips": member_body(replace(RIGHT, tip=ChamferedTip(0.2)), Blank(20)),
    "rounded tips": member_body(replace(RIGHT, tip=RoundedTip(0.2)), Blank(20)),
    "double with groove, chamfered bore, on a height": member_body(
        RIGHT, Blank(24, Bore(14, chamfer=0.5), z=-3, course=DOUBLE_HELICAL, groove=Groove(4, 0.3))
    ),
    "double ring with groove": member_body(RING, Blank(16, course=DOUBLE_HELICAL, groove=Groove(3, 0.3))),
    "ring": member_body(RING, Blank(15)),
    "left-hand double ring": member_body(replace(RING, helix_angle_deg=-20), Blank(15, course=DOUBLE_HELICAL)),
    "more than a turn": Body(InvoluteGear(9, 1, helix_angle_deg=30).outline, 70, twists=(radians(400),)),
    "twisted cycloidal pinion": Body(CycloidalGear(8, 1.0, 15.0, 2.0, 0.8, 1.6).outline, 10, twists=(0.7,)),
}


@pytest.fixture(scope="module", params=HELICAL, ids=str)
def made(request):
    body = HELICAL[request.param]
    return body, body_solid(body)


def test_body_is_one_valid_solid_of_area_times_width(made):
    body, solid = made
    assert len(solid.Solids()) == 1
    assert solid.isValid()
    straight = replace(body, twists=(), groove=None).volume
    if body.groove:
        rim = RING if body.holes else RIGHT
        floor = pi * (rim.root_radius + (0.3 if body.holes else -0.3)) ** 2
        straight -= body.groove.width * abs(abs(rim.outline.area) - floor)
    assert body.volume == pytest.approx(straight, rel=1e-12)
    assert exact_volume(solid) == pytest.approx(body.volume, rel=1e-6)


def test_faces_lie_on_the_exact_helicoid(made):
    body, solid = made
    assert flank_deviation(solid, body, grid=13) <= 1e-4


def test_tip_and_root_stay_true_cylinders():
    faces = body_solid(HELICAL["right-hand, keyed chamfered bore"]).Faces()
    radii = [round(BRepAdaptor_Surface(f.wrapped).Cylinder().Radius(), 9) for f in faces if f.geomType() == "CYLINDER"]
    assert radii.count(round(RIGHT.tip_radius, 9)) == 20
    assert radii.count(round(RIGHT.root_radius, 9)) == 20


@pytest.mark.parametrize("body", [HELICAL["left-hand on a height"], HELICAL["double, keyed bore"]])
def test_deviation_sees_a_turn_one_part_in_a_thousand_off(body):
    off = replace(body, twists=tuple(1.001 * t for t in body.twists))
    error = 0.001 * abs(body.twists[0])
    # A flank turned by an angle moves along its normal by that angle times the base radius.
    assert flank_deviation(body_solid(body), off) == pytest.approx(error * RIGHT.base_radius, rel=0.15)


def test_deviation_sees_straight_teeth_and_the_other_hand():
    body = HELICAL["right-hand, keyed chamfered bore"]
    solid = body_solid(body)
    assert flank_deviation(solid, replace(body, twists=(-body.twists[0],))) > 0.5
    assert flank_deviation(body_solid(replace(body, twists=())), body) > 0.5
    assert flank_deviation(solid, replace(body, twists=(1e-9,))) > 0.5


@pytest.mark.parametrize("height", [3.0, 10.0, 17.0])
def test_a_cut_across_shows_the_turned_outline(height):
    body = HELICAL["double, keyed bore"]
    solid = body_solid(body)
    upper = solid.intersect(cq.Solid.makeBox(80, 80, 40, cq.Vector(-40, -40, height)))
    assert check_solid(upper, body.volume * (20 - height) / 20).isValid()
    (section,) = [f for f in upper.Faces() if f.geomType() == "PLANE" and abs(f.Center().z - height) < 1e-6]
    points = np.array([complex(p.x, p.y) for e in section.outerWire().Edges() for p in e.positions([0.2, 0.5, 0.8])])
    turn = min(height, 20 - height) * tan(radians(20)) / RIGHT.reference_radius
    assert np.max(np.abs(field_of(RIGHT.outline).near(points * np.exp(-1j * turn)).distance)) <= 1e-4


def test_right_hand_teeth_turn_counter_clockwise_on_their_way_up():
    top = [v for v in body_solid(member_body(RIGHT, Blank(20))).Vertices() if abs(v.Z - 20) < 1e-6]
    tips = np.array([complex(v.X, v.Y) for v in top if abs(complex(v.X, v.Y)) > RIGHT.tip_radius - 1e-6])
    # The tooth that stood on the +x axis below.
    turn = 20 * tan(radians(20)) / RIGHT.reference_radius
    assert np.sum(np.abs(np.angle(tips * np.exp(-1j * turn))) < pi / 20) == 2
    assert 0.1 < turn < 2 * pi / 20 * 1.2


@pytest.mark.parametrize("name", HELICAL)
def test_facets_are_watertight_and_within_their_tolerance(tmp_path, name):
    body, tol = HELICAL[name], 0.05
    done = write_stl(tmp_path / "part.stl", body, tol)
    judge = trimesh.load(tmp_path / "part.stl")
    assert judge.is_watertight
    assert judge.is_winding_consistent
    assert abs(done.volume - body.volume) <= tol * judge.area
    assert judge.bounds[:, 2] == pytest.approx(
        [body.z, body.z + body.width + max((b.height for b in body.bosses), default=0)], abs=1e-5
    )


@pytest.mark.parametrize("tol", [0.1, 0.01])
@pytest.mark.parametrize("name", ["left-hand on a height", "ring", "twisted cycloidal pinion"])
def test_no_side_of_a_facet_leaves_the_helicoid_further_than_the_tolerance(name, tol):
    body = HELICAL[name]
    toothed = next(o for o in (*body.holes, body.outer) if o.order > 1)
    found = body_triangles(body, tol)
    corners = found.points[found.corners]
    corners = corners[np.ptp(corners[:, :, 2], axis=1) > 0]
    if body.holes:
        corners = corners[np.all(np.hypot(*corners[:, :, :2].transpose(2, 0, 1)) < toothed.r_max + 1e-6, axis=1)]
    shares = np.linspace(0, 1, 7)[:, None, None]
    sides = corners * (1 - shares[..., None]) + np.roll(corners, -1, axis=1) * shares[..., None]
    x, y, z = sides.reshape(-1, 3).T
    gaps = np.abs(field_of(toothed).near((x + 1j * y) * np.exp(-1j * body.turn_at(z - body.z))).distance)
    assert tol / 10 < gaps.max() <= tol * (1 + 1e-3)


@pytest.mark.parametrize("name", ["right-hand, keyed chamfered bore", "double, keyed bore", "ring"])
def test_step_reads_back_as_the_same_solid(tmp_path, name):
    body = HELICAL[name]
    solid = body_solid(body)
    (back,) = write_step(tmp_path / "part.step", cq.Assembly(solid, name="part")).parts
    assert len(back.shape.Solids()) == 1
    assert len(back.shape.Faces()) == len(solid.Faces())
    assert back.shape.isValid()
    assert exact_volume(back.shape) == pytest.approx(body.volume, rel=1e-6)
    assert flank_deviation(back.shape, body) <= 1e-4


@settings(deadline=None, max_examples=6)
@given(
    teeth=st.integers(8, 40),
    helix=st.floats(1, 45),
    hand=st.sampled_from([-1, 1]),
    width=st.floats(1, 40),
    course=st.sampled_from([(1,), (1, -1)]),
)
def test_any_helix_gives_a_sound_body(teeth, helix, hand, width, course):
    gear = InvoluteGear(teeth, 1.5, helix_angle_deg=hand * helix, profile_shift=0.3)
    body = member_body(gear, Blank(width, course=course))
    assert flank_deviation(body_solid(body), body) <= 1e-4


SAME_WIDTH = Blank(6), Blank(6)


def pair(hand=-1, *, blanks=SAME_WIDTH, helix=25.0, mate=None):
    pinion = InvoluteGear(9, 1.5, profile_shift=0.4, helix_angle_deg=helix, tooth_thinning=0.04)
    wheel = InvoluteGear(14, 1.5, helix_angle_deg=hand * helix if mate is None else mate, tooth_thinning=0.04)
    distance = pinion.reference_radius + wheel.reference_radius + 0.58
    return SpurPair(pinion, wheel, distance, *blanks)


def placed(machine, psi):
    solids = {p.name: body_solid(replace(p.body, z=0)) for p in machine.parts}
    return [solids[p.name].moved(location(p, psi)) for p in machine.parts]


def overlap(machine, psi):
    first, second = placed(machine, psi)
    return first.intersect(second).Volume()


@pytest.mark.parametrize(
    "blanks",
    [
        (Blank(6), Blank(6)),
        (Blank(6), Blank(3, z=2.5)),
        (Blank(6, course=DOUBLE_HELICAL), Blank(4, z=1, course=DOUBLE_HELICAL)),
        (Blank(6, course=DOUBLE_HELICAL), Blank(6, course=DOUBLE_HELICAL, groove=Groove(1, 0.2))),
    ],
    ids=["on one level", "wheel set higher", "double, wheel narrower", "groove in the wheel only"],
)
def test_helical_mates_stay_clear_all_the_way_up(blanks):
    machine = pair(blanks=blanks)
    assert roll_test(machine).verdict == "rolls"
    assert overlap(machine, 0.37) == pytest.approx(0, abs=1e-9)
    first, second = placed(machine, 0.37)
    # In space the gap is never wider than in the section of the roll test, and narrower by the helix at most.
    clearance = roll_test(machine).worst.clearance
    assert clearance * cos(radians(32)) < first.distance(second) < 0.2


def test_mates_of_one_hand_would_cut_into_each_other():
    machine = pair()
    driver, driven = machine.parts
    wrong = replace(driven, body=replace(driven.body, twists=driver.body.twists))
    first = body_solid(driver.body).moved(location(driver))
    assert first.intersect(body_solid(wrong.body).moved(location(wrong))).Volume() > 0.5


def test_a_ring_and_its_pinion_of_one_hand_stay_clear():
    pinion = InvoluteGear(12, 1.5, helix_angle_deg=20, tooth_thinning=0.04)
    ring = InternalGear(30, 1.5, helix_angle_deg=20, tooth_thinning=0.04, tip_shortening=0.5)
    distance = ring.reference_radius - pinion.reference_radius
    machine = SpurPair(pinion, ring, distance, Blank(6), Blank(4, z=1.5))
    assert roll_test(machine).verdict == "rolls"
    assert overlap(machine, 0.2) == pytest.approx(0, abs=1e-9)


def stage(sun=15.0, planet=-15.0, ring=-15.0):
    members = [
        InvoluteGear(12, 1, helix_angle_deg=sun, tooth_thinning=0.04),
        InvoluteGear(18, 1, helix_angle_deg=planet, tooth_thinning=0.04),
        InternalGear(48, 1, helix_angle_deg=ring, tooth_thinning=0.04, tip_shortening=0.3),
    ]
    distance = members[0].reference_radius + members[1].reference_radius
    return PlanetaryStage(*members, 3, distance, Blank(5), Blank(4, z=0.5), Blank(5))


def test_a_helical_planetary_stage_stands_clear():
    machine = stage()
    assert roll_test(machine).verdict == "rolls"
    sun, first, *_, ring = placed(machine, 0.3)
    assert sun.intersect(first).Volume() == pytest.approx(0, abs=1e-9)
    assert ring.intersect(first).Volume() == pytest.approx(0, abs=1e-9)
    assert len({c.shapes[0].hashCode() for c in assembly(machine.parts).children}) == 3


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: pair(hand=1), "25 deg and driven one of 25 deg.* of opposite hand: give driven -25 deg"),
        (lambda: pair(mate=-24.5), "25 deg and driven one of -24.5 deg.*give driven -25 deg"),
        (lambda: pair(mate=0), "-25 deg"),
        (lambda: stage(planet=15), "sun has .* give planet -15 deg"),
        (lambda: stage(ring=15), "planet has .* of the same hand when one is a ring: give ring -15 deg"),
        (lambda: pair(blanks=(Blank(6), Blank(6, course=DOUBLE_HELICAL))), "driver is helical and driven double"),
        (
            lambda: pair(blanks=(Blank(6, course=DOUBLE_HELICAL), Blank(4, course=DOUBLE_HELICAL))),
            "at a height of 3 mm and those of driven at 2 mm",
        ),
        (lambda: Groove(0, 1), "groove is 0 mm wide"),
        (lambda: Body(RIGHT.outline, 5, twists=(0.1, -0.1), groove=Groove(5, 1)), "below the face width, 5 mm"),
        (lambda: Body(RIGHT.outline, 5, twists=(0.1,), groove=Groove(1, 1)), "with 1 helices"),
        (lambda: Body(RIGHT.outline, 5, bore=Bore(36), twists=(0.1, -0.1), groove=Groove(1, 1)), "the body has 17.78"),
        (lambda: Body(disc(10), 5, twists=(0.1,)), "without a toothed rim"),
        (lambda: Body(RIGHT.outline, 5, twists=(float("nan"),)), "must be numbers"),
        (lambda: Body(RIGHT.outline, 5, holes=(holes(3, 17, 2.5),), twists=(0.1,)), "lies beside helical teeth"),
        (lambda: Body(disc(52), 5, holes=(RING.outline,), twists=(0.1,)), "lies beside helical teeth"),
    ],
)
def test_what_cannot_work_is_refused_with_its_numbers(make, message):
    with pytest.raises(DesignError, match=message):
        make()


def test_the_rate_follows_from_lead():
    # Lead = 2 pi r / tan(helix angle): one turn.
    lead = 2 * pi * RIGHT.reference_radius / tan(radians(20))
    assert twist_rate(RIGHT) * lead == pytest.approx(2 * pi, rel=1e-12)
    assert twist_rate(LEFT) == -twist_rate(RIGHT)
    assert twist_rate(CycloidalGear(8, 1.0, 15.0, 2.0, 0.8, 1.6)) == 0
    # Axial pitch = pi m / sin(helix angle): one tooth.
    assert degrees(twist_rate(RIGHT) * pi * 2 / sin(radians(20))) == pytest.approx(18, rel=1e-12)


RECIPE = (Path(__file__).parents[2] / "recipes" / "helical-pair.toml").read_text(encoding="utf-8")


def read(tmp_path, text):
    file = tmp_path / "recipe.toml"
    file.write_text(text, encoding="utf-8")
    return read_recipe(file).machine


def test_a_recipe_gives_hands_and_courses(tmp_path):
    driver, driven = read(tmp_path, RECIPE).parts
    assert driver.body.twists[0] * 20 / 18 == pytest.approx(-driven.body.twists[0] * 50 / 16)
    assert driver.body.twists[0] > 0
    double = RECIPE.replace("face_width", "double_helical = true\nface_width").replace("= 16.0", "= 18.0")
    for part in read(tmp_path, double).parts:
        assert part.body.twists[0] == -part.body.twists[1] != 0
    grooved = double.replace("double_helical = true", "double_helical = true\ngroove_width = 4")
    for part, plain in zip(read(tmp_path, grooved).parts, read(tmp_path, double).parts, strict=True):
        assert part.body.groove == Groove(4, 0.5)
        assert part.body.twist_rate == pytest.approx(plain.body.twist_rate, rel=1e-12)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("-20.0", "20.0", "pinion has a helix angle of 20 deg.*opposite hand: give wheel -20 deg"),
        ("-20.0", "-75", "driven.helix_angle = -75: must be a number not below -60 and not above 60"),
        ("-20.0", "-20\ngroove_width = 3", "groove_width needs double_helical"),
        ("-20.0", "0\ndouble_helical = true", "double_helical needs a helix_angle"),
    ],
)
def test_a_recipe_that_does_not_match_is_refused(tmp_path, old, new, message):
    with pytest.raises(ValueError, match=message):
        read(tmp_path, RECIPE.replace(old, new))


def test_kernel_checks_catch_a_wrong_volume():
    body = HELICAL["ring"]
    with pytest.raises(SolidError, match="they must agree"):
        check_solid(cq.Solid(build_solid(body)), body.volume * (1 + 2e-6))
