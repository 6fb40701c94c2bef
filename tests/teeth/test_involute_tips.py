from dataclasses import replace

import numpy as np
import pytest
from involute_shapes import polygon

from gearsolid.errors import DesignError
from gearsolid.teeth.inspection import drawn_pin_dimension, drawn_span, ideal_pin, pin_dimension, span, span_limits
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.involute_relations import inv
from gearsolid.teeth.tip_form import ChamferedTip, RoundedTip, TipRelief

PLAIN = {
    "gear 20": InvoluteGear(20, 2),
    "undercut gear 10": InvoluteGear(10, 2),
    "helical gear 31": InvoluteGear(31, 2, helix_angle_deg=18),
    "ring 60": InternalGear(60, 2),
    "ring 45": InternalGear(45, 2, profile_shift=-0.2),
}


@pytest.fixture(params=PLAIN.values(), ids=PLAIN)
def plain(request):
    return request.param


def fallen(member, z):
    """Distance [mm] of points from the tooth's involute, square to it: involutes of one circle are parallel curves."""
    angle = np.arccos(member.base_radius / np.abs(z))
    half = member.thickness / (2 * member.reference_radius)
    involute = half + member.hand * (inv(member.transverse_angle) - inv(angle))
    return member.base_radius * (involute - np.abs(np.angle(z)))


@pytest.mark.parametrize("power", [1, 2], ids=["straight", "parabolic"])
def test_relief_falls_back_as_asked(plain, power):
    member = replace(plain, relief=TipRelief(0.03, 1.2, power))
    below, relief = (p.curve for p in member.outline.pieces[1:3])
    z = relief.point(relief.sample(33))
    tangent = np.sqrt(np.abs(z) ** 2 - member.base_radius**2)
    tip = np.sqrt(member.tip_radius**2 - member.base_radius**2)
    gone = fallen(member, z)
    # The involute under each point has rolled further by what has fallen back there.
    share = 1 + (member.hand * (tangent - tip) + gone) / 1.2
    assert np.allclose(gone, 0.03 * share**power, atol=1e-9)
    assert np.max(np.abs(fallen(member, below.point(below.sample(33))))) < 1e-9
    assert abs(relief.end) == pytest.approx(member.tip_radius, abs=1e-10)
    assert gone[-1] == pytest.approx(0.03, rel=0.06)


@pytest.mark.parametrize("power", [1, 2], ids=["straight", "parabolic"])
def test_relief_velocity_is_the_change_of_its_points(plain, power):
    relief = replace(plain, relief=TipRelief(0.03, 1.2, power)).outline.pieces[2].curve
    t, step = relief.sample(9)[1:-1], 1e-6 * (relief.span[1] - relief.span[0])
    by_difference = (relief.point(t + step) - relief.point(t - step)) / (2 * step)
    assert np.allclose(relief.derivative(t), by_difference, rtol=1e-6)


def test_parabolic_relief_starts_smoothly_and_straight_relief_with_an_edge(plain):
    edges = []
    for power in (1, 2):
        below, relief = (p.curve for p in replace(plain, relief=TipRelief(0.03, 1.2, power)).outline.pieces[1:3])
        after, before = relief.tangent(np.asarray(relief.span[0])), below.tangent(np.asarray(below.span[1]))
        edges.append(float(np.angle(after / before)))
    assert edges[0] > 1e-3
    assert abs(edges[1]) < 1e-6


def test_chamfer_has_its_height_and_width(plain):
    member = replace(plain, tip=ChamferedTip(0.3))
    chamfer = next(p.curve for p in member.outline.pieces if p.role == "tip")
    assert abs(abs(chamfer.start) - member.tip_radius) == pytest.approx(0.3, abs=1e-10)
    assert abs(chamfer.end) == pytest.approx(member.tip_radius, rel=1e-12)
    narrower = np.abs(np.angle(member.outline.pieces[3].curve.start)) * member.tip_radius
    assert narrower == pytest.approx(member.tip_land / 2 - 0.3, abs=1e-9)
    assert member.tip_form_radius == pytest.approx(member.tip_radius - member.hand * 0.3)


def test_rounding_runs_smoothly_into_flank_and_tip(plain):
    member = replace(plain, tip=RoundedTip(0.2))
    _, flank, arc, tip = (p.curve for p in member.outline.pieces[:4])
    for before, after in ((flank, arc), (arc, tip)):
        turn = np.angle(after.tangent(np.asarray(after.span[0])) / before.tangent(np.asarray(before.span[1])))
        assert abs(turn) < 1e-6
    assert arc.radius == 0.2
    assert 0 < arc.sweep < np.pi


@pytest.mark.parametrize(
    "change",
    [
        {"tip": ChamferedTip(0.2)},
        {"tip": RoundedTip(0.15)},
        {"relief": TipRelief(0.02, 1.0)},
        {"relief": TipRelief(0.02, 1.0, 2), "tip": RoundedTip(0.15)},
        {"relief": TipRelief(0.02, 1.0), "tip": ChamferedTip(0.2)},
    ],
    ids=["chamfer", "rounding", "relief", "relief and rounding", "relief and chamfer"],
)
def test_finished_tips_only_take_material_away(plain, change):
    member = replace(plain, **change)
    finished, sharp = polygon(member.outline, 60), polygon(plain.outline, 60)
    assert finished.is_valid
    more, less = (sharp, finished) if plain.hand > 0 else (finished, sharp)
    assert less.difference(more).area < 1e-4 * plain.module**2 * plain.teeth
    assert more.area > less.area
    assert member.root_radius == plain.root_radius
    assert member.form_radius == plain.form_radius
    assert member.outline.pieces[0].curve.start == plain.outline.pieces[0].curve.start


def test_measures_keep_to_the_involute_below_the_relief():
    plain = InvoluteGear(30, 2)
    relieved = replace(plain, relief=TipRelief(0.02, 1.0))
    assert drawn_span(relieved, 4) == pytest.approx(span(relieved, 4), abs=1e-10)
    assert span(relieved, 4) == pytest.approx(span(plain, 4), abs=1e-12)
    assert drawn_pin_dimension(relieved, ideal_pin(plain)) == pytest.approx(pin_dimension(plain, ideal_pin(plain)))
    most = span_limits(plain)[1]
    long = replace(plain, relief=TipRelief(0.02, 3.0))
    for measure in (span, drawn_span):
        assert measure(plain, most) > 0
        with pytest.raises(DesignError, match=f"over {most} teeth"):
            measure(long, most)


def test_chamfer_shortens_the_contact():
    sharp = InvolutePair(InvoluteGear(20, 2), InvoluteGear(30, 2))
    chamfered = InvolutePair(replace(sharp.gear, tip=ChamferedTip(0.3)), sharp.mate)
    assert chamfered.contact_ratio < sharp.contact_ratio - 0.05
    assert chamfered.nominal_contact_ratio == sharp.nominal_contact_ratio


@pytest.mark.parametrize(
    ("make", "words"),
    [
        (lambda: TipRelief(0, 1), "relief is 0 mm"),
        (lambda: TipRelief(0.3, 1), "fifth of the length, 0.2 mm"),
        (lambda: TipRelief(0.01, 1, 3), "power of the tip relief is 3"),
        (lambda: ChamferedTip(0), "chamfer is 0 mm"),
        (lambda: RoundedTip(-1), "radius of -1 mm"),
        (lambda: InvoluteGear(20, 2, relief=TipRelief(0.02, 12)), "takes 12 mm of roll; the flank has"),
        (lambda: InvoluteGear(20, 2, tip=ChamferedTip(4)), "chamfer 4 mm high does not fit"),
        (lambda: InvoluteGear(20, 2, tip=RoundedTip(4)), "rounding of 4 mm does not fit"),
        (lambda: InvoluteGear(20, 2, tip=ChamferedTip(0.8)), "leave no tip land; the sharp tooth has 1.39 mm"),
        (lambda: InternalGear(36, 2, relief=TipRelief(0.1, 0.6)), "too near the base circle"),
    ],
    ids=lambda v: v if isinstance(v, str) else "",
)
def test_refusals_name_the_number_and_the_limit(make, words):
    with pytest.raises(DesignError, match=words):
        make()
