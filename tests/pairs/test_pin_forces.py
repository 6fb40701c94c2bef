"""Pin forces: balance, the law with gaps at its two ends, Hertz against the shop form."""

from dataclasses import replace

import numpy as np
import pytest

from gearsolid.errors import DesignError
from gearsolid.pairs.line_contact import contact_half_width, contact_stress, reduced_modulus
from gearsolid.pairs.pin_forces import CAUTION, LeverLaw, ring_pin_loss, roller_force, roller_loss
from gearsolid.teeth.pinwheel import CycloidDisc

DISC = CycloidDisc(39, 1.5, 77.5, 4.0)
LAW = LeverLaw(DISC, 431200.0)
STEEL = reduced_modulus(206000, 0.3, 206000, 0.3)


@pytest.mark.parametrize("crank", [0.0, 1.3, 4.5, 200.0])
def test_forces_balance_the_torque_about_the_disc_axis(crank):
    loads = LAW.loads(crank)
    axis = DISC.eccentricity * np.exp(1j * np.radians(crank))
    pins = DISC.pin_circle_radius * np.exp(2j * np.pi * np.arange(40) / 40)
    force = loads.force * (loads.contact - pins) / DISC.pin_radius
    torque = np.sum(np.imag(np.conj(loads.contact - axis) * force))
    assert torque == pytest.approx(-LAW.torque, rel=1e-12)
    assert np.sum(force) * np.exp(-1j * np.radians(crank)) == pytest.approx(LAW.resultant(crank), rel=1e-9)
    assert 19 <= np.count_nonzero(loads.force > 0) <= 20


def test_mean_push_along_the_crank_is_the_closed_form():
    push = [LAW.resultant(a).real for a in np.linspace(0, 9, 300, endpoint=False)]
    # The closed form takes the mean scale of forces, which itself wavers by half a percent.
    assert np.mean(push) == pytest.approx(LAW.force_along, rel=2e-3)


def test_input_torque_is_what_the_ratio_asks():
    assert LAW.force_across * DISC.eccentricity == pytest.approx(LAW.torque / 39)


def test_without_gaps_the_stiffness_does_not_matter():
    plain = LAW.loads(1.0).force
    for stiffness in (1e3, 1e6):
        assert LAW.loads_with_gaps(1.0, stiffness).force == pytest.approx(plain, abs=1e-6)


def test_gaps_leave_fewer_pins_loaded_and_load_them_more():
    law = replace(LAW, disc=replace(DISC, equidistant=0.01, moved_distance=-0.01))
    soft, stiff = law.loads_with_gaps(1.0, 1e3), law.loads_with_gaps(1.0, 1e9)
    assert np.count_nonzero(stiff.force) < 4 < np.count_nonzero(soft.force) < 20
    assert stiff.force.max() > soft.force.max() > law.loads(1.0).force.max()
    for loads in (soft, stiff):
        assert np.sum(loads.force * loads.lever) == pytest.approx(law.torque, rel=1e-6)


def test_worst_stress_bounds_the_stress_at_every_crank_angle_and_is_reached():
    worst, phase = LAW.worst_stress(16.0, STEEL)
    found = [LAW.stresses(LAW.loads(a), 16.0, STEEL).max() for a in np.linspace(0, 9, 301)]
    assert max(found) == pytest.approx(worst, rel=1e-3)
    largest_force = np.degrees(np.arccos(DISC.shortening))
    assert phase > largest_force + 20


def test_line_contact_in_the_form_of_the_shop():
    """0.418 sqrt(E F / (b rho)) for steel, common practice, is within 0.05 % of Hertz' formula."""
    stress = contact_stress(np.array([1000.0]), 10.0, np.array(4.0), np.array(6.0), STEEL)
    assert stress == pytest.approx(0.418 * np.sqrt(206000 * 1000 / (10 * 2.4)), rel=5e-4)
    half = contact_half_width(np.array([1000.0]), 10.0, np.array(4.0), np.array(6.0), STEEL)
    # Pressure over the strip is half an ellipse and carries the force.
    assert np.pi / 2 * stress * half * 10.0 == pytest.approx(1000.0)


def test_roller_force_balances_the_torque():
    force = roller_force(10000.0, 8, 21.0)
    angles = 2 * np.pi * np.arange(8) / 8 + 0.1
    carried = force * np.maximum(np.sin(angles), 0)
    assert np.sum(carried * 21.0 * np.sin(angles)) == pytest.approx(10000.0)


@pytest.mark.parametrize("friction", [0.02, 0.1])
def test_ring_pin_loss_by_summing_sliding_at_the_pins(friction):
    """The disc slides on a pin as fast as it turns times the distance of the contact from the pitch point."""
    lost = []
    for crank in np.linspace(0, 9, 200, endpoint=False):
        loads = LAW.loads(crank)
        pitch_point = DISC.eccentricity * 40 * np.exp(1j * np.radians(crank))
        lost.append(np.sum(friction * loads.force * np.abs(loads.contact - pitch_point)))
    assert np.mean(lost) / LAW.torque == pytest.approx(ring_pin_loss(DISC, friction), rel=2e-3)


def test_roller_loss_grows_with_eccentricity():
    assert roller_loss(DISC, 0.05, 42.0) == pytest.approx(4 * 0.05 * 1.5 * 40 / (np.pi * 42))


def test_refusals_name_what_is_wrong():
    with pytest.raises(DesignError, match="torque"):
        replace(LAW, torque=0.0)
    with pytest.raises(DesignError, match="tooth difference of 2"):
        LeverLaw(CycloidDisc(24, 1.2, 60.0, 4.0, difference=2), 1000.0)
    with pytest.raises(DesignError, match="stiffness"):
        LAW.loads_with_gaps(0.0, 0.0)
    with pytest.raises(DesignError, match="gaps down to -0"):
        replace(LAW, disc=replace(DISC, moved_distance=0.02)).loads_with_gaps(0.0, 1e5)
    assert "First-pass" in CAUTION
