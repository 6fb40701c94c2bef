"""Points of known members come back within what their noise allows, and bad points are refused in words."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mate_shapes import cycloidal, rolled, straight
from measured_shapes import drawn, off, once_round

from gearsolid.curves.curve import Reversed, Turned
from gearsolid.curves.outline import Outline, Piece
from gearsolid.curves.parallel import Parallel
from gearsolid.curves.primitives import Arc
from gearsolid.curves.rolling import CircleOnCircle
from gearsolid.curves.roulette import Trace
from gearsolid.curves.smoothing import smoothed, smoothed_rim
from gearsolid.errors import DesignError
from gearsolid.teeth.drawing import read_drawing, read_points
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.mate import domed_tips, external_mate
from gearsolid.teeth.measured import measured_flank, measured_ring, measured_wheel

GEAR = InvoluteGear(20, 1)


def lobed():
    """Ten lobes without a corner: parallel to an epitrochoid."""
    path = Turned(Trace(CircleOnCircle(15, -16.5), 40, -2 * np.pi, 0), complex(np.exp(1j * np.pi / 10)))
    return Outline((Piece(Parallel(Reversed(path), 5), "flank"),), 10)


MEMBERS = {
    "involute": (GEAR.outline, measured_wheel, {"tip", "flank"}),
    "undercut": (InvoluteGear(9, 2).outline, measured_wheel, {"tip", "flank"}),
    "cornered": (straight(24, 13, 11, 0.3, 0.7), measured_wheel, {"tip", "flank", "root"}),
    "cycloidal": (cycloidal(30, 2.5, 4.0), measured_wheel, {"tip", "flank", "root"}),
    "ring": (InternalGear(40, 1).outline, measured_ring, {"tip", "flank"}),
    "lobes": (lobed(), measured_wheel, {"flank"}),
}


@pytest.mark.parametrize(
    "noise", [0.0, 2e-3, pytest.param(5e-3, marks=pytest.mark.slow)], ids=["exact", "2 um", "5 um"]
)
@pytest.mark.parametrize(("outline", "measure", "roles"), MEMBERS.values(), ids=MEMBERS)
def test_a_member_comes_back_within_the_noise(outline, measure, roles, noise):
    centre, turn = 12.3 - 4.5j, 0.4
    found = measure(once_round(outline, 20, noise, centre=centre, turn=turn))
    assert found.teeth == outline.order
    assert found.rms == pytest.approx(noise, rel=0.1, abs=6e-4)
    assert abs(found.centre - centre) < max(0.1 * noise, 1e-4)
    away = np.abs(off(found, outline))
    assert np.sqrt(np.mean(away**2)) < 0.35 * noise + 3e-4
    assert away.max() < noise + 2.5e-3
    assert {p.role for p in found.outline.pieces} == roles
    pitch = 360 / outline.order
    assert (found.turn - np.degrees(turn) + pitch / 2) % pitch - pitch / 2 == pytest.approx(0, abs=0.02)


def test_the_stated_residual_is_that_of_the_points():
    """Only the radii of tips and roots are exact arcs; all the noise must be told."""
    z = once_round(GEAR.outline, 20, 2e-3, seed=5)
    found = measured_wheel(z)
    assert found.points == z.size
    assert found.rms < found.worst < 6 * found.rms
    assert "um rms" in found.sentence
    assert "20 teeth" in found.sentence
    stray = int(np.argmax(np.abs(z)))
    z[stray] *= 1.01
    assert measured_wheel(z).worst == pytest.approx(0.11, rel=0.05)


def test_tips_come_back_as_true_arcs():
    found = measured_wheel(once_round(GEAR.outline, 20, 1e-3))
    tip = next(p.curve for p in found.outline.pieces if p.role == "tip")
    assert isinstance(tip, Arc)
    assert tip.centre == 0
    assert tip.radius == pytest.approx(11, abs=1e-3)
    assert found.tip_radius == pytest.approx(11, abs=2e-3)
    assert found.root_radius == pytest.approx(8.75, abs=2e-3)


def test_pitch_errors_are_told_apart_from_form():
    z = once_round(GEAR.outline, 20).reshape(20, -1)
    shift = np.zeros(20)
    shift[7] = 2e-3
    found = measured_wheel((z * np.exp(1j * shift[:, None])).ravel(), centre=0)
    # The mean of all teeth moves by a twentieth.
    assert found.pitch_error == pytest.approx(0.95 * 2e-3 * (found.tip_radius + found.root_radius) / 2, rel=0.05)


def test_either_way_round_and_any_start_give_the_same():
    z = once_round(GEAR.outline, 20, 1e-3)
    plain = measured_wheel(z)
    for other in (z[::-1], np.roll(z, 777), np.append(z, z[0])):
        found = measured_wheel(other)
        assert found.rms == pytest.approx(plain.rms, rel=0.1)
        assert np.max(np.abs(off(found, plain.outline))) < 2e-4


@settings(max_examples=6, deadline=None)
@given(x=st.floats(-50, 50), y=st.floats(-50, 50), turn=st.floats(0, 6.3), seed=st.integers(0, 99))
def test_place_and_turn_of_the_wheel_do_not_matter(x, y, turn, seed):
    found = measured_wheel(once_round(GEAR.outline, 15, 1e-3, seed, complex(x, y), turn))
    assert abs(found.centre - complex(x, y)) < 3e-4
    assert np.sqrt(np.mean(off(found, GEAR.outline) ** 2)) < 4e-4


def test_a_pinion_for_an_old_wheel():
    """From points to the mate that runs: the restorer's whole way."""
    wheel = cycloidal(60, 2.0, 1.5, 1.1, 1.3)
    found = measured_wheel(once_round(wheel, 25, 2e-3, centre=3 + 1j))
    pinion = external_mate(domed_tips(found.outline, 0.1), 30, 10, 5.9, tooth_thinning=0.06)
    assert {r.piece for r in pinion.touching}
    for driver in (found.outline, wheel):
        contact = rolled(driver, pinion)
        assert contact.verdict == "rolls"
        assert contact.play == pytest.approx(0.06, abs=0.01)


def test_a_flank_alone_makes_a_wheel():
    flank = next(p.curve for p in GEAR.outline.pieces if p.role == "flank")
    rng = np.random.default_rng(3)
    z = flank.point(flank.sample(120)) + 1e-3 * (rng.standard_normal(120) + 1j * rng.standard_normal(120))
    for points in (z, z[::-1], np.conj(z), z * np.exp(2j * np.pi * 3 / 20)):
        found = measured_flank(points, 20)
        assert [p.role for p in found.outline.pieces] == ["flank", "tip", "flank", "root"]
        z_found = np.concatenate([p.curve.point(p.curve.sample(60)) for p in found.outline.pieces if p.role == "flank"])
        exact = np.array([GEAR.half_angle_at(max(r, GEAR.base_radius)) for r in np.abs(z_found)])
        assert np.max(np.abs(z_found) * np.abs(np.abs(np.angle(z_found)) - exact)) < 3e-3
        assert found.rms == pytest.approx(1e-3, rel=0.3)


def cut(z, start, count):
    return np.concatenate([z[:start], z[start + count :]])


WHOLE = once_round(GEAR.outline, 20)
REFUSALS = {
    "open": (lambda: measured_wheel(WHOLE[:-60]), r"open: its last point lies \d\.\d+ mm from the first"),
    "few in all": (lambda: measured_wheel(WHOLE[::100]), "25 measured points"),
    "few on a tooth": (lambda: measured_wheel(WHOLE[::14]), r"tooth \d+ of 20 has \d points; at least 12"),
    "another count": (lambda: measured_wheel(WHOLE, teeth=21), "20 teeth were counted .* but 21 were stated"),
    "a disc": (lambda: measured_wheel(10 * np.exp(2j * np.pi * np.arange(500) / 500)), "off even pitch|were counted"),
    "missing tooth": (lambda: measured_wheel(cut(WHOLE, 600, 119), centre=0), r"deg off even pitch, \d+% of it"),
    "wrong centre": (lambda: measured_wheel(WHOLE, centre=2), "off even pitch|teeth were counted"),
    "not finite": (lambda: measured_wheel(np.append(WHOLE, np.nan)), "1 of .* have no finite coordinates"),
    "short flank": (lambda: measured_flank(WHOLE[:5], 20), "5 points"),
    "flank over the middle": (lambda: measured_flank(WHOLE[30:75], 20), "beside the middle of its tooth"),
}


@pytest.mark.parametrize(("measure", "says"), REFUSALS.values(), ids=REFUSALS)
def test_bad_points_are_refused_with_numbers(measure, says):
    with pytest.raises(DesignError, match=says):
        measure()


def test_points_from_a_file(tmp_path):
    file = tmp_path / "wheel.csv"
    rows = "\n".join(f"{z.real:.6f},{z.imag:.6f}" for z in WHOLE)
    file.write_text(f"x,y\n# probe 1 mm\n\n{rows}\n", encoding="utf-8")
    assert read_points(file) == pytest.approx(WHOLE, abs=1e-6)
    assert measured_wheel(read_points(file)).teeth == 20
    file.write_text("1.5;2.5\n3 4\n", encoding="utf-8")
    assert list(read_points(file)) == [1.5 + 2.5j, 3 + 4j]


@pytest.mark.parametrize(
    ("text", "says"), [("1,2\n3,x\n", "line 2 .*'3,x'"), ("1,2\n3\n", "line 2"), ("x,y\n1,2\nend,of\n", "line 3")]
)
def test_a_bad_line_is_named(tmp_path, text, says):
    file = tmp_path / "bad.csv"
    file.write_text(text, encoding="utf-8")
    with pytest.raises(DesignError, match=says):
        read_points(file)


@pytest.mark.parametrize(
    "options",
    [{}, {"units": 1, "scale": 1 / 25.4}, {"units": 0}, {"polyline": True}],
    ids=["mm", "inch", "no units", "bulges"],
)
def test_a_drawing_comes_back(tmp_path, options):
    outline = MEMBERS["cornered"][0]
    found = measured_wheel(read_drawing(drawn(tmp_path / "old.dxf", outline, **options)))
    assert found.teeth == outline.order
    assert found.worst < 2e-3
    assert np.sqrt(np.mean(off(found, outline) ** 2)) < 2e-4


@pytest.mark.parametrize("name", ["involute", "ring"])
def test_a_drawing_of_splines_comes_back(tmp_path, name):
    outline, measure, _ = MEMBERS[name]
    found = measure(read_drawing(drawn(tmp_path / "old.dxf", outline)))
    assert found.worst < 2e-3
    assert np.sqrt(np.mean(off(found, outline) ** 2)) < 2e-4


def test_the_longest_outline_on_the_layer_is_taken(tmp_path):
    import ezdxf

    path = drawn(tmp_path / "old.dxf", GEAR.outline, layer="TEETH")
    document = ezdxf.readfile(path)
    document.modelspace().add_circle((0, 0), 3)
    document.modelspace().add_circle((0, 0), 30, dxfattribs={"layer": "FRAME"})
    document.modelspace().add_text("old wheel")
    document.saveas(path)
    assert np.ptp(np.abs(read_drawing(path))) == pytest.approx(0, abs=1e-9)
    assert measured_wheel(read_drawing(path, layer="TEETH")).teeth == 20


def test_bad_drawings_are_refused(tmp_path):
    path = drawn(tmp_path / "open.dxf", GEAR.outline, leave_out=1)
    with pytest.raises(DesignError, match=r"open by 0\.\d+ mm, from x"):
        read_drawing(path)
    with pytest.raises(DesignError, match="on layer 'TEETH'; it has 0 entities"):
        read_drawing(path, layer="TEETH")
    nonsense = tmp_path / "no.dxf"
    nonsense.write_text("no drawing", encoding="utf-8")
    with pytest.raises(DesignError, match=r"no\.dxf cannot be read"):
        read_drawing(nonsense)
    with pytest.raises(DesignError, match="cannot be read"):
        read_drawing(tmp_path / "missing.dxf")


def test_smoothing_takes_the_noise_off_and_keeps_the_ends():
    t = np.linspace(0, 1, 400)
    exact = 10 * t + 1j * np.sin(3 * t)
    rng = np.random.default_rng(7)
    noisy = exact + 0.01 * (rng.standard_normal(400) + 1j * rng.standard_normal(400))
    fit = smoothed(noisy, t, start=complex(exact[0]), end=complex(exact[-1]))
    assert fit.spline.start == exact[0]
    assert fit.spline.end == pytest.approx(exact[-1], abs=1e-12)
    assert np.sqrt(np.mean(fit.offsets**2)) == pytest.approx(0.01, rel=0.15)
    inside = np.linspace(0, 1, 200)
    y = np.interp(fit.spline.point(inside).real, 10 * t, exact.imag)
    assert np.sqrt(np.mean((fit.spline.point(inside).imag - y) ** 2)) < 0.003
    with pytest.raises(DesignError, match="11 points"):
        smoothed(noisy[:11], t[:11])


def test_a_smooth_rim_leads_smoothly_into_its_next_pitch():
    outline = lobed()
    z = outline.pieces[0].curve.point(outline.pieces[0].curve.sample(301)[:-1])
    fit = smoothed_rim(z, np.arange(300) / 300, 1, outline.step)
    first, last = np.asarray(0.0), np.asarray(1.0)
    for value in (fit.spline.point, fit.spline.derivative, fit.spline.second):
        assert complex(value(last)) == pytest.approx(complex(value(first)) * outline.step, rel=1e-8)
    assert np.max(np.abs(fit.offsets)) < 1e-5
