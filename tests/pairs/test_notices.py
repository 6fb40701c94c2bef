from dataclasses import replace

import pytest

from gearsolid.curves.loops import disc
from gearsolid.pairs.blank import Blank, body_of
from gearsolid.pairs.colours import BRASS
from gearsolid.pairs.motion import Motion
from gearsolid.pairs.notices import part_notices, walls
from gearsolid.pairs.part import Body, Boss, Part
from gearsolid.shop.bore import Bore
from gearsolid.shop.openings import Crossings, hole_circle
from gearsolid.shop.processes import process
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear

WHEEL = InvoluteGear(40, 2)
RING = InternalGear(48, 2)


def _parts(*bodies):
    return [Part(f"wheel {k}", b, Motion(), BRASS) for k, b in enumerate(bodies, 1)]


def _codes(body, module=None, made_by=None):
    return [n.code for n in part_notices(_parts(body), module, made_by)]


def test_walls_from_the_axis_outward():
    """Root circle of 40 teeth of module 2: 37.5 mm."""
    inner, outer = hole_circle(4, 30, 5), Crossings(5, 44, 68, 5, 2).outline
    found = walls(body_of(WHEEL.outline, Blank(8, Bore(16), openings=(outer, inner))))
    assert [(w.inside, w.outside) for w in found] == [
        ("bore", "openings"),
        ("openings", "openings"),
        ("openings", "root circle"),
    ]
    assert [w.thickness for w in found] == pytest.approx([12.5 - 8, 22 - 17.5, 37.5 - 34], abs=1e-3)


def test_walls_of_a_ring():
    found = walls(body_of(RING.outline, Blank(8, rim_diameter=130, openings=(hole_circle(6, 118, 5),))))
    assert [w.thickness for w in found] == pytest.approx([56.5 - RING.outline.r_max, 65 - 61.5])


def test_openings_side_by_side_have_no_wall_along_the_radius():
    four, four_more = hole_circle(4, 50, 6), hole_circle(4, 50, 8, 45)
    found = walls(Body(disc(40), 5, holes=(four, four_more)))
    assert [w.thickness for w in found] == pytest.approx([11])


@pytest.mark.parametrize(("diameter", "codes"), [(44, []), (46, ["thin-over-keyway"]), (50, ["thin-over-keyway"])])
def test_root_over_keyway(diameter, codes):
    body = body_of(InvoluteGear(34, 2).outline, Blank(20, Bore.keyed(diameter)))
    over = 31.5 - Bore.keyed(diameter).floor
    assert (over < 5) == bool(codes), "2.5 modules"
    assert _codes(body, 2) == codes


@pytest.mark.parametrize(("hub", "codes"), [(38.5, ["thin-hub"]), (38.7, [])])
def test_hub_over_keyway(hub, codes):
    """Bore 25, key 8 x 7, floor at 15.8 mm: half the key's height is 3.5 mm."""
    crossed = Blank(20, Bore.keyed(25), openings=(Crossings(5, hub, 66, 6, 2).outline,))
    assert _codes(body_of(WHEEL.outline, crossed)) == codes
    assert _codes(Body(disc(50), 20, bore=Bore.keyed(25), bosses=(Boss(disc(hub / 2), 8),))) == codes


def test_a_thin_rim_is_noted_with_number_and_limit():
    body = body_of(WHEEL.outline, Blank(8, Bore(16), openings=(hole_circle(4, 60, 8),)))
    (notice,) = part_notices(_parts(body), 2, None)
    assert (notice.code, notice.limit) == ("thin-rim", 4)
    assert notice.number == pytest.approx(3.5, abs=1e-3)
    assert "wheel 1: the rim" in notice.sentence
    assert _codes(body_of(WHEEL.outline, Blank(8, openings=(hole_circle(4, 58, 8),))), 2) == []


def test_a_process_notes_module_wall_and_hole():
    body = body_of(InvoluteGear(40, 0.6).outline, Blank(3, Bore(1.5), openings=(hole_circle(4, 8.5, 6),)))
    assert _codes(body, None, process("FDM")) == ["thin-wall", "small-hole"]
    assert _codes(body, 0.6, process("FDM")) == ["module-too-small", "thin-wall", "small-hole"]
    assert _codes(body, None, process("FDM", {"min_wall": 0.4, "min_hole": 1.0})) == []


def test_equal_bodies_are_spoken_of_once():
    body = body_of(WHEEL.outline, Blank(8, openings=(hole_circle(4, 60, 8),)))
    assert len(part_notices(_parts(body, replace(body, z=5.0)), 2, None)) == 1
    assert len(part_notices(_parts(body, replace(body, width=5.0)), 2, None)) == 2
