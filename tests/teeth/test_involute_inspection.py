import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from gearsolid.errors import DesignError
from gearsolid.teeth.inspection import (
    chord,
    drawn_chord,
    drawn_pin_dimension,
    drawn_span,
    ideal_pin,
    ideal_span_teeth,
    pin_dimension,
    span,
    span_limits,
)
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear


def made(kind, *numbers, **rest):
    try:
        return kind(*numbers, **rest)
    except DesignError:
        return None


GEARS = st.builds(
    lambda z, a, x, b, thin: made(InvoluteGear, z, 2, a, x, b, tooth_thinning=thin, tip_shortening=0.2),
    st.integers(8, 90),
    st.floats(15, 22),
    st.floats(-0.4, 0.8),
    st.floats(-30, 30),
    st.floats(0, 0.2),
)
RINGS = st.builds(
    lambda z, a, x, b, thin: made(InternalGear, z, 2, a, x, b, tooth_thinning=thin, tip_shortening=0.2),
    st.integers(30, 120),
    st.floats(18, 25),
    st.floats(-0.5, 0.2),
    st.floats(-30, 30),
    st.floats(0, 0.2),
)


@settings(max_examples=60, deadline=None)
@given(GEARS)
def test_spans_computed_and_drawn_agree(gear):
    assume(gear is not None)
    low, high = span_limits(gear)
    for k in range(max(low - 1, 1), high + 2):
        if low <= k <= high:
            assert drawn_span(gear, k) == pytest.approx(span(gear, k), abs=1e-10)
        else:
            for measure in (span, drawn_span):
                with pytest.raises(DesignError, match=f"over {k} teeth"):
                    measure(gear, k)


@settings(max_examples=60, deadline=None)
@given(st.one_of(GEARS, RINGS), st.floats(0.9, 1.1))
def test_pin_dimensions_computed_and_drawn_agree(member, share):
    assume(member is not None)
    pin = share * ideal_pin(member)
    try:
        by_formula = pin_dimension(member, pin)
    except DesignError:
        assume(False)
    assert drawn_pin_dimension(member, pin) == pytest.approx(by_formula, abs=1e-9)


@pytest.mark.parametrize(
    "member",
    [InvoluteGear(20, 1), InvoluteGear(9, 2), InternalGear(48, 1), InternalGear(51, 2, profile_shift=-0.3)],
    ids=["gear 20", "undercut gear 9", "ring 48", "ring 51"],
)
def test_pins_that_touch_no_involute_are_refused_both_ways(member):
    """Between the smallest and the largest pin both ways answer, outside both refuse."""
    pins = ideal_pin(member) * np.linspace(0.2, 8, 79)
    answers = []
    for pin in pins:
        given_by = []
        for measure in (pin_dimension, drawn_pin_dimension):
            try:
                given_by.append(measure(member, pin))
            except DesignError as refusal:
                assert f"{pin:.4g} mm" in str(refusal)
        assert len(given_by) in (0, 2), pin
        answers.append(bool(given_by))
    assert any(answers)
    assert not answers[0]
    assert not answers[-1]


def test_ideal_pin_touches_the_shifted_reference_circle():
    gear = InvoluteGear(24, 2, profile_shift=0.3)
    pin = ideal_pin(gear)
    dimension = drawn_pin_dimension(gear, pin)
    centre = (dimension - pin) / 2
    along = np.sqrt(centre**2 - gear.base_radius**2) - pin / 2
    assert np.hypot(along, gear.base_radius) == pytest.approx(24 + 0.6, abs=1e-9)


def test_span_changes_by_a_base_pitch_per_tooth():
    gear = InvoluteGear(40, 2)
    low, high = span_limits(gear)
    values = [drawn_span(gear, k) for k in range(low, high + 1)]
    assert np.allclose(np.diff(values), gear.base_pitch)
    assert low <= round(ideal_span_teeth(gear)) <= high


def test_measures_see_the_thinning():
    """A tooth thinner by 0.1 mm: the span shrinks by the thinning along the base tangent."""
    full, thin = InvoluteGear(30, 2), InvoluteGear(30, 2, tooth_thinning=0.1)
    for measure in (span, drawn_span):
        assert measure(full, 4) - measure(thin, 4) == pytest.approx(0.1 * np.cos(np.radians(20)), abs=1e-10)
    assert pin_dimension(thin, 3.5) < pin_dimension(full, 3.5) - 0.1


def test_undercut_gear_without_flank_for_anvils_says_so():
    with pytest.raises(DesignError, match="use pins"):
        span(InvoluteGear(4, 1, profile_shift=-0.2), 1)


@pytest.mark.parametrize("teeth", [12, 25, 60])
def test_chords_computed_and_drawn_agree(teeth):
    gear = InvoluteGear(teeth, 3, profile_shift=0.2, tooth_thinning=0.1)
    assert drawn_chord(gear) == pytest.approx(chord(gear), abs=1e-10)


def test_chords_that_cannot_be_drawn_are_refused():
    with pytest.raises(DesignError, match="15 deg"):
        drawn_chord(InvoluteGear(20, 1, helix_angle_deg=15))
    with pytest.raises(DesignError, match="does not cross the flanks"):
        drawn_chord(InvoluteGear(30, 1, profile_shift=1.4, tip_shortening=0.5))
