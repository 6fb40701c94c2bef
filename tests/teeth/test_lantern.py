"""Lantern pinions and their toothed mates: the flank against the trundle itself, trimming, limits."""

from dataclasses import replace
from math import inf, pi, sin

import numpy as np
import pytest

from gearsolid.curves.crossing import self_crossings
from gearsolid.errors import DesignError
from gearsolid.teeth.lantern import LanternPinion, LanternRing, LanternWheel, PinRingPinion
from gearsolid.teeth.lantern_pair import lantern_pair
from gearsolid.teeth.trundle_flank import TrundleFlank

MATES = {
    "wheel 64 / 8": LanternWheel(64, 8, 1, 0.525, 1.9, 1.0, 0.1),
    "small wheel 12 / 10": LanternWheel(12, 10, 2, 1.2, 2.2, 2.0, 0.1, 0.3),
    "ring 60 / 12": LanternRing(60, 12, 1, 0.7, 1.2, 1.0, 0.1),
    "straight ring 24 / 12": LanternRing(24, 12, 1, 0.7, 1.2, 1.0, 0.1),
    "pinion 12 / 40 pins": PinRingPinion(12, 40, 1, 0.7, 1.0, 1.0, 0.1),
}


@pytest.fixture(params=MATES.values(), ids=MATES)
def mate(request):
    return request.param


def trundle_centres(mate, turns):
    """Path of a trundle's centre seen from the mate, by rolling pitch circle on pitch circle; cusp on the +x axis."""
    big = mate.reference_radius
    small = mate.module * mate.trundles / 2
    if isinstance(mate, PinRingPinion):
        # The ring of pins around the pinion: the line of centres turns with the ring.
        t = turns * small / big
        return (big - small) * np.exp(1j * t) + small * np.exp(1j * (t - turns))
    sign = -1 if mate.hand < 0 else 1
    t = sign * turns * small / big
    return (big + sign * small) * np.exp(1j * t) - sign * small * np.exp(1j * (t + turns))


def test_flank_is_one_trundle_radius_from_the_centres_and_square_to_the_pitch_point(mate):
    flank = mate.flank
    turns = np.linspace(max(flank.first_turn, 0.05), mate.last_turn, 40)
    centre, foot = trundle_centres(mate, turns), flank.curve.point(turns)
    assert np.max(np.abs(flank.curve.base.point(turns) - centre)) < 1e-12, "double generation included"
    assert np.max(np.abs(np.abs(foot - centre) - mate.trundle_radius)) < 1e-12
    small = mate.module * mate.trundles / 2
    sign = -1 if isinstance(mate, LanternRing) else 1
    pitch_point = mate.reference_radius * np.exp(1j * sign * turns * small / mate.reference_radius)
    assert np.max(np.abs(np.imag((foot - centre) * np.conj(pitch_point - centre)))) < 1e-9


def test_no_trundle_cuts_into_the_flank_at_any_turn(mate):
    """Trundles at every turn keep their distance from the drawn space; at the contact they touch it."""
    space = np.concatenate([p.curve.point(p.curve.sample(200)) for p in mate.outline.pieces])
    to_space = np.exp(1j * mate.hand * (pi / mate.teeth - mate.tooth_thinning / (2 * mate.reference_radius)))
    lower = space[np.angle(space) * mate.hand < 0] * to_space
    turns = np.linspace(0, mate.last_turn, 400)
    gaps = np.abs(trundle_centres(mate, turns)[:, None] - lower[None, :]).min(axis=1) - mate.trundle_radius
    assert gaps.min() > -1e-9
    worked = turns >= mate.flank.first_turn
    assert gaps[worked].max() < 2e-3 * mate.module, "sampled flank points are that near to the true contact"


def test_untrimmed_flank_would_cross_itself():
    """The trap: the parallel turns back at its cusp; the drawn part starts after it."""
    flank = TrundleFlank(32, 4, 0.625)
    assert flank.curve.regressions()[0] == pytest.approx(flank.cusp_turn, abs=1e-9)
    assert flank.first_turn > flank.cusp_turn > 0
    inside = np.linspace(flank.cusp_turn, flank.first_turn, 50)[1:-1]
    assert np.all(np.abs(flank.curve.point(inside) - 32) < 0.625), "there the flank lies inside the standing trundle"
    assert self_crossings(MATES["wheel 64 / 8"].outline.pieces[1].curve).size == 0


@pytest.mark.parametrize("radius", [0.01, 0.1])
def test_thin_trundles_start_at_four_thirds_of_the_cusp(radius):
    flank = TrundleFlank(32, 4, radius)
    assert flank.first_turn / flank.cusp_turn == pytest.approx(4 / 3, rel=2e-3 * radius / 0.1 + 1e-5)


def test_straight_ring_flank_starts_at_the_line_of_centres():
    flank = TrundleFlank(12, -6, 0.7)
    assert flank.cusp_turn == flank.first_turn == 0
    z = flank.curve.point(np.linspace(0.1, 2, 20))
    assert np.max(np.abs(z.imag + 0.7)) < 1e-12


def test_thinning_is_taken_at_the_pitch_circle_on_both_sides():
    """Turning the drawn flanks back by the thinning gives the flanks of the full tooth."""
    full, thin = replace(MATES["wheel 64 / 8"], tooth_thinning=0.0), MATES["wheel 64 / 8"]
    turn = np.exp(1j * 0.1 / 64)
    for gear_full, gear_thin in zip(
        *([p.curve for p in g.outline.pieces if p.role == "flank"][1:2] for g in (full, thin)), strict=True
    ):
        t = gear_thin.sample(9)
        assert np.max(np.abs(gear_full.point(t) * turn - gear_thin.point(t))) < 1e-12


def test_walls_run_parallel_to_the_middle_of_the_space():
    wheel = replace(MATES["wheel 64 / 8"], tooth_thinning=0.0, root_fillet=0.2)
    wall = next(p.curve for p in wheel.outline.pieces if p.role == "flank")
    ends = wall.point(np.asarray(wall.span)) * np.exp(1j * pi / 64)
    assert np.ptp(ends.imag) < 1e-12


def test_pointed_tooth_has_no_land():
    wheel = MATES["wheel 64 / 8"]
    pointed = replace(wheel, addendum=wheel.pointed_addendum)
    assert "tip" not in [p.role for p in pointed.outline.pieces]
    assert pointed.outline.r_max == pytest.approx(pointed.tip_radius, rel=1e-9)


@pytest.mark.parametrize(
    ("build", "words"),
    [
        (lambda: LanternPinion(2, 1, 0.5), "2 trundles"),
        (lambda: LanternPinion(8, 1, 1.6), f"below {4 * sin(pi / 8):.4g} mm"),
        (lambda: LanternPinion(8, -1, 0.5), "module is -1 mm"),
        (lambda: replace(MATES["wheel 64 / 8"], teeth=2), "teeth are 2"),
        (lambda: replace(MATES["wheel 64 / 8"], trundle_radius=1.55), "leave no tooth in a pitch of 3.142 mm"),
        (lambda: replace(MATES["wheel 64 / 8"], addendum=2.2), "tooth ends at 2.1304 mm"),
        (lambda: replace(MATES["wheel 64 / 8"], dedendum=0.5), "at least 0.5"),
        (lambda: replace(MATES["wheel 64 / 8"], root_fillet=0.6), "largest is 0.5"),
        (lambda: LanternWheel(5, 10, 1, 0.7, 0.5, 1.6), "neighbouring spaces meet 1.3"),
        (lambda: LanternRing(20, 11, 1, 0.5, 0.8, 0.8), "at most half as many, 10"),
        (lambda: PinRingPinion(12, 12, 1, 0.5, 0.8, 0.8), "more pins than the pinion has teeth"),
        (lambda: TrundleFlank(5, 0.5, 2.0).first_turn, "must be below 1.8"),
        (lambda: lantern_pair(60, 5, 1, trundle_radius=0.7), "0.8[0-9]+ of a pitch"),
        (lambda: lantern_pair(60, 8, 1, play=0.5), "play is 0.5"),
    ],
    ids=range(14),
)
def test_refusals_name_the_number_and_the_limit(build, words):
    with pytest.raises(DesignError, match=words):
        build()


@pytest.mark.parametrize(("teeth", "trundles"), [(60, 6), (64, 8), (96, 12), (30, 10)])
def test_lantern_pairs_keep_contact(teeth, trundles):
    pair = lantern_pair(teeth, trundles, 0.5)
    assert pair.wheel.contact_ratio > 1
    assert pair.centre_distance == (teeth + trundles) / 4
    assert pair.wheel.addendum == pytest.approx(0.95 * pair.wheel.pointed_addendum, rel=1e-9)
    assert pair.wheel.root_fillet == inf
    assert pair.driver is pair.wheel


def test_lantern_member_speaks_as_other_members_do():
    lantern = LanternPinion(8, 1.5, 0.8)
    assert (lantern.teeth, lantern.reference_radius) == (8, 6)
    assert [lantern.root_radius, lantern.tip_radius] == pytest.approx([lantern.outline.r_min, lantern.outline.r_max])
