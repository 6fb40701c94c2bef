from math import pi

import pytest

from gearsolid.errors import DesignError
from gearsolid.pairs.blank import Blank, body_of
from gearsolid.shop.bore import Bore
from gearsolid.shop.openings import Crossings, hole_circle
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear

WHEEL = InvoluteGear(40, 2).outline
RING = InternalGear(48, 2).outline
CROSSINGS = Crossings(5, 26, 64, 6, 2, 4).outline


def test_openings_take_their_area_out_of_the_body():
    plain = body_of(WHEEL, Blank(8, Bore.keyed(16)))
    crossed = body_of(WHEEL, Blank(8, Bore.keyed(16), openings=(CROSSINGS,)))
    assert crossed.volume == pytest.approx(plain.volume + 8 * CROSSINGS.area)


def test_a_ring_has_bolt_holes_in_its_rim():
    bolts = hole_circle(6, 118, 5)
    ring = body_of(RING, Blank(8, rim_diameter=130, openings=(bolts,)))
    assert ring.volume == pytest.approx(body_of(RING, Blank(8, rim_diameter=130)).volume - 8 * 6 * pi * 2.5**2)


@pytest.mark.parametrize(
    ("outline", "blank", "message"),
    [
        (WHEEL, Blank(8, Bore.keyed(24), openings=(CROSSINGS,)), r"from 13 to 32 mm .* the bore, which reaches 15\.8"),
        (WHEEL, Blank(8, openings=(hole_circle(6, 60, 16),)), r"from 22 to 38 mm .* the root circle of 37\.5 mm"),
        (
            RING,
            Blank(8, rim_diameter=130, openings=(hole_circle(6, 104, 5),)),
            r"root circle, which reaches 50\.\d* mm",
        ),
        (RING, Blank(8, rim_diameter=130, openings=(hole_circle(6, 126, 5),)), "the rim of 65 mm"),
    ],
    ids=["keyway", "roots", "roots of a ring", "rim"],
)
def test_openings_that_break_through_are_refused_with_numbers(outline, blank, message):
    with pytest.raises(DesignError, match=message):
        body_of(outline, blank)
