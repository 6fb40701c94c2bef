"""Bodies of every kind of boundary the solids have to carry, shared by the CAD tests."""

from dataclasses import replace

from gearsolid.curves.loops import disc, holes, pins
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.primitives import Segment
from gearsolid.pairs.part import Body, Boss
from gearsolid.shop.bore import Bore
from gearsolid.shop.keys_inch import inch_key_for_bore
from gearsolid.shop.openings import Crossings
from gearsolid.shop.profile_hole import d_hole, double_d_hole, hexagon_hole, square_hole
from gearsolid.teeth.cycloidal import CycloidalGear
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.pinwheel import CycloidDisc, PinRing

SQUARE = Outline((Piece(Segment(10 - 10j, 10 + 10j), "tip"),), 4)
PINS = PinRing(12, 50, 5, 49)

PLAIN = {
    "square": Body(SQUARE, 5),
    "disc on a height": Body(disc(12), 3, z=7.5),
    "square with round bore": Body(SQUARE, 5, bore=Bore(8)),
    "square with chamfered bore": Body(SQUARE, 5, bore=Bore(8, None, 0.5)),
    "square with keyed bore": Body(SQUARE, 5, bore=Bore.keyed(8)),
    "square with chamfered keyed bore": Body(SQUARE, 5, bore=Bore.keyed(10, 0.5), z=-2),
    "square with two keyways": Body(SQUARE, 5, bore=replace(Bore.keyed(8), second_key=90)),
    "disc with chamfered inch keyways": Body(
        disc(22), 9, bore=Bore(25.4, inch_key_for_bore(25.4), 0.8, second_key=180), z=1
    ),
    "disc with D hole": Body(disc(8), 5, bore=d_hole(6)),
    "hub with double-D hole": Body(disc(12), 3, bore=double_d_hole(6, 4), bosses=(Boss(disc(5), 4),), z=2),
    "disc with square hole": Body(disc(8), 5, bore=square_hole(6)),
    "hub with drilled square hole": Body(disc(12), 3, bore=square_hole(6, 0.8), bosses=(Boss(disc(6), 4),)),
    "disc with drilled hexagon hole": Body(disc(10), 5, bore=hexagon_hole(10, 0.5)),
    "plate with holes": Body(disc(30), 4, holes=(holes(5, 18, 4, 0.3),), bore=Bore(10)),
    "plate with one hole off the axis": Body(disc(30), 4, holes=(holes(1, 18, 4),)),
    "carrier with pins": Body(disc(30), 4, bore=Bore(12), bosses=(Boss(pins(3, 20, 4), 9),)),
    "hub without bore": Body(disc(30), 4, bosses=(Boss(disc(8), 6),)),
    "hub, keyed chamfered bore, pins and holes": Body(
        disc(40),
        6,
        holes=(holes(6, 28, 5),),
        bore=Bore.keyed(20, 1.0),
        bosses=(Boss(disc(17), 8), Boss(pins(6, 28, 2, 0.5236), 5)),
        z=3,
    ),
    "pin ring in one piece": Body(disc(62), 8, holes=(PINS.studded, holes(4, 57, 1.5, 0.2))),
    "housing with pockets": Body(disc(62), 8, holes=(PINS.pocketed,)),
}

TOOTHED = {
    "involute 20, keyed chamfered bore": Body(InvoluteGear(20, 2).outline, 10, bore=Bore.keyed(14, 0.5)),
    "undercut involute 7": Body(InvoluteGear(7, 2).outline, 10, bore=Bore(3)),
    "small involute 8": Body(InvoluteGear(8, 0.3, profile_shift=0.5).outline, 2),
    "helical section 23": Body(InvoluteGear(23, 2, helix_angle_deg=25).outline, 10),
    "involute annulus 48": Body(disc(56), 10, holes=(InternalGear(48, 2).outline,)),
    "cycloid disc with roller holes": Body(
        CycloidDisc(11, 1.5, 50, 5).outline, 10, holes=(holes(6, 25, 6.5),), bore=Bore(20)
    ),
    "clock wheel": Body(CycloidalGear(60, 1.0, 4.0, 15.0, 1.3, 1.6).outline, 2, bore=Bore(4)),
    "crossed clock wheel": Body(
        CycloidalGear(60, 1.0, 4.0, 15.0, 1.3, 1.6).outline, 2, (Crossings(5, 14, 52, 3.6, 1.2, 2.4).outline,), Bore(4)
    ),
    "clock pinion": Body(CycloidalGear(8, 1.0, 15.0, 2.0, 0.8, 1.6).outline, 6, bore=Bore(2)),
}

BODIES = PLAIN | TOOTHED
