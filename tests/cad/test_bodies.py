from dataclasses import replace
from math import pi

import cadquery as cq
import pytest
from bodies import BODIES, SQUARE, TOOTHED

from gearsolid.curves.loops import disc, holes, pins
from gearsolid.errors import DesignError, SolidError
from gearsolid.output.deviation import flank_deviation
from gearsolid.pairs.part import Body, Boss
from gearsolid.shop.bore import Bore
from gearsolid.solids.body import body_solid, build_solid
from gearsolid.solids.check import check_prism, check_solid, exact_volume
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear

pytestmark = pytest.mark.cad


@pytest.fixture(scope="module", params=BODIES, ids=str)
def made(request):
    body = BODIES[request.param]
    return body, body_solid(body)


def test_body_is_one_valid_solid_of_exact_volume_on_its_level(made):
    body, solid = made
    box = solid.BoundingBox(tolerance=1e-3)
    assert len(solid.Solids()) == 1
    assert solid.isValid()
    assert exact_volume(solid) == pytest.approx(body.volume, rel=1e-6)
    assert box.zmin == pytest.approx(body.z, abs=1e-5)
    assert box.zmax == pytest.approx(body.z + body.width + max((b.height for b in body.bosses), default=0), abs=1e-5)


def test_edges_lie_on_the_exact_outline(made):
    body, solid = made
    assert flank_deviation(solid, body) <= 1e-4


@pytest.mark.parametrize("tol", [1e-3, 1e-4, 1e-5, 1e-6])
def test_flanks_are_as_close_as_asked(tol):
    body = TOOTHED["undercut involute 7"]
    assert flank_deviation(body_solid(body, tol), body) <= tol


def test_deviation_sees_a_tooth_ten_microns_thinner():
    solid = body_solid(Body(InvoluteGear(20, 2).outline, 5))
    fat = Body(InvoluteGear(20, 2, tooth_thinning=-0.02).outline, 5)
    assert flank_deviation(solid, fat) == pytest.approx(0.01, rel=0.1)


def test_chamfered_keyed_bore_equals_the_boolean_one():
    bore = Bore.keyed(10, 0.5)
    cutter = cq.Workplane().circle(5).extrude(6).union(cq.Workplane().box(6.4, 3, 6, (False, True, False)))
    cone = cq.Solid.makeCone(5.5, 4.5, 1)
    plate = cq.Workplane().box(20, 20, 6, (True, True, False)).cut(cutter).val()
    plate = plate.cut(cone, cone.mirror("XY").moved(cq.Location((0, 0, 6))))
    assert bore.key.width == 3
    assert exact_volume(body_solid(Body(SQUARE, 6, bore=bore))) == pytest.approx(exact_volume(plate), rel=1e-8)


def test_round_parts_are_true_cylinders():
    body = TOOTHED["involute 20, keyed chamfered bore"]
    gear = InvoluteGear(20, 2)
    faces = body_solid(body).Faces()
    radii = [round(f._geomAdaptor().Cylinder().Radius(), 9) for f in faces if f.geomType() == "CYLINDER"]
    assert radii.count(round(gear.tip_radius, 9)) == 20
    assert radii.count(round(gear.root_radius, 9)) == 20
    assert radii.count(7) == 1
    assert [f.geomType() for f in faces].count("CONE") == 2
    assert len(faces) == 6 * 20 + 2 + 4 + 2


def test_keyway_floor_stands_in_line_with_a_tooth():
    solid = body_solid(Body(InvoluteGear(20, 2).outline, 10, bore=Bore.keyed(14)))
    floors = [f for f in solid.Faces() if f.geomType() == "PLANE" and f.normalAt().x < -0.999]
    assert [f.Center().toTuple() for f in floors] == [pytest.approx((9.3, 0, 5))]
    tips = [f.Center() for f in solid.Faces() if f.geomType() == "CYLINDER" and f.Center().Length > 21]
    assert any(t.x > 21 and abs(t.y) < 1e-6 for t in tips)


def test_bore_runs_on_through_the_hub():
    body = Body(disc(30), 5, bore=Bore(10, None, 1.0), bosses=(Boss(disc(10), 7),))
    frustums = 2 * (pi / 3 * (25 + 30 + 36) - 25 * pi)
    assert body.volume == pytest.approx(pi * (900 * 5 + 100 * 7 - 25 * 12) - frustums, rel=1e-12)
    line = cq.Solid.makeCylinder(4.9, 20)
    assert line.intersect(body_solid(body)).Volume() == pytest.approx(0, abs=1e-9)


def test_later_booleans_work_on_a_toothed_body():
    body = TOOTHED["involute 20, keyed chamfered bore"]
    cut = body_solid(body).cut(cq.Solid.makeCylinder(1.5, 10, cq.Vector(-12, 0, 0)))
    assert check_solid(cut, body.volume - pi * 1.5**2 * 10).isValid()


def test_loosest_fit_still_keeps_the_volume():
    body = replace(TOOTHED["small involute 8"], z=1.0)
    assert exact_volume(body_solid(body, tol=0.01)) == pytest.approx(body.volume, rel=1e-6)


@pytest.mark.parametrize(
    "body",
    [
        Body(disc(10), 3, holes=(holes(3, 9, 2),)),
        Body(disc(10), 3, holes=(holes(3, 14, 2),)),
        Body(disc(10), 3, holes=(holes(3, 4, 2),), bore=Bore(5)),
        Body(disc(10), 3, bosses=(Boss(pins(3, 9, 2), 4),)),
        Body(InvoluteGear(20, 2).outline, 3, holes=(holes(3, 17, 2),)),
        Body(disc(40), 3, holes=(InternalGear(48, 2).outline,)),
    ],
    ids=["hole over rim", "hole outside", "hole in bore", "pin over rim", "hole in roots", "ring outside its rim"],
)
def test_crossing_boundaries_are_refused(body):
    with pytest.raises(SolidError, match=r"faulty|volume"):
        body_solid(body)


def test_checker_refuses_another_volume():
    body = TOOTHED["undercut involute 7"]
    solid = cq.Solid(build_solid(body))
    assert check_solid(solid, body.volume).isValid()
    with pytest.raises(SolidError, match="they must agree"):
        check_solid(solid, body.volume * (1 + 2e-6))


def test_checker_refuses_two_solids_and_an_open_one():
    box = cq.Solid.makeBox(1, 1, 1)
    two = cq.Compound.makeCompound([box, box.moved(cq.Location((5, 0, 0)))])
    with pytest.raises(SolidError, match="2 solids"):
        check_solid(two, 2)
    open_box = cq.Solid.makeSolid(cq.Shell.makeShell(box.Faces()[:5]))
    with pytest.raises(SolidError, match="faulty"):
        check_solid(open_box, 1)


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: Body(disc(10), 3, bore=Bore(20)), "the body has 10 mm"),
        (lambda: Body(disc(30), 3, bore=Bore(10, None, 1), bosses=(Boss(disc(6), 3),)), "the body has 6 mm"),
        (lambda: Body(disc(30), 1.5, bore=Bore(10, None, 1)), "no room for two chamfers"),
        (lambda: Body(disc(30), 3, bosses=(Boss(disc(6), 3), Boss(disc(5), 3))), "2 hubs"),
        (lambda: Body(disc(60), 3, holes=(InternalGear(48, 2).outline,), bore=Bore(10)), "no place for a bore"),
        (lambda: Boss(disc(5), 0), "0 mm high"),
        (lambda: Body(disc(5), 0), "face width is 0 mm"),
    ],
)
def test_impossible_bodies_are_refused_with_their_limits(make, message):
    with pytest.raises(DesignError, match=message):
        make()


def test_end_faces_of_another_section_are_refused():
    """The quick check of straight bodies is itself checked."""
    body = TOOTHED["small involute 8"]
    solid = body_solid(body)
    assert check_prism(solid, body.outer.area + sum(h.area for h in body.holes)) is solid
    with pytest.raises(SolidError, match="end faces cover"):
        check_prism(solid, 1.00001 * body.outer.area)


def test_holes_over_the_rim_are_refused_by_the_end_face():
    with pytest.raises(SolidError):
        body_solid(Body(disc(10.0), 4.0, holes=(holes(3, 9.5, 2.0),)))
