from math import pi

import numpy as np
import pytest
from golden import cases, kinds, misses
from scipy.optimize import minimize_scalar
from shapely.affinity import rotate, translate
from shapely.geometry import Polygon

from gearsolid.pairs.lobe_rotors import LobeRotors
from gearsolid.pairs.rotor_set import RotorSet
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobes import LobeRotor
from gearsolid.teeth.pinwheel import CycloidDisc
from gearsolid.teeth.rotors import OuterRotor


def rotor_set(given):
    lobes, e = given["lobes"], given["eccentricity"]
    circle, radius = e * lobes * given["trochoid"], e * given["equidistant"]
    return RotorSet(
        CycloidDisc(lobes - 1, e, circle, radius),
        OuterRotor(lobes, circle, radius, given.get("root_radius", circle - radius + 2 * e)),
        given["width"],
        Bore(10.0),
        2 * (circle + 10),
    )


def polygon(outline, per_piece):
    pitch = np.concatenate([p.curve.point(p.curve.sample(per_piece))[:-1] for p in outline.pieces])
    z = np.concatenate([pitch * outline.step**k for k in range(outline.order)])
    return Polygon(np.column_stack([z.real, z.imag]))


@pytest.mark.parametrize(("given", "expected"), cases("rotors", "rotor set"))
def test_rotor_set(given, expected):
    rotors = rotor_set(given)
    inner, outer = rotors.inner, rotors.outer
    path = inner.path
    sharpest = minimize_scalar(
        lambda u: float(path.curvature_radius(np.asarray(u))), bounds=(1, pi), method="bounded", options={"xatol": 1e-9}
    )
    flow = rotors.flow(np.linspace(0, 360 / outer.lobes, 2001))
    computed = {
        "lobe_circle": outer.lobe_circle_radius,
        "lobe_radius": outer.lobe_radius,
        "k1": inner.shortening,
        "inner_tip": inner.outline.r_max,
        "inner_root": inner.outline.r_min,
        "outer_tip": outer.outline.r_min,
        "least_root": inner.tip_radius + inner.eccentricity,
        "undercut_limit": inner.undercut_limit,
        "undercut_phi": np.degrees(sharpest.x),
        "margin": sharpest.fun - outer.lobe_radius,
        "swing": rotors.chamber_swing,
        "volume": rotors.displacement,
        "annulus": rotors.width * pi * (inner.tip_radius**2 - inner.root_radius**2),
        "ripple": 100 * np.ptp(flow) * 2 * pi / rotors.displacement,
    }
    assert misses(expected, computed) == []


@pytest.mark.parametrize(("given", "expected"), cases("rotors", "chambers"))
def test_chambers_as_polygons(given, expected):
    """The chamber is what the inner rotor leaves of the outer one's hole; no contact point is used."""
    rotors = rotor_set(given)
    lobes = rotors.outer.lobes
    # Polygons of touching curves gape by a few millionths of a millimetre; swelling one closes the slits.
    hole, disc = polygon(rotors.outer.outline, 8000), polygon(rotors.inner.outline, 8000).buffer(3e-7, quad_segs=1)

    def chambers(turn):
        outer = rotate(hole, turn, origin=(0, 0), use_radians=True)
        inner = rotate(disc, turn * rotors.ratio, origin=(0, 0), use_radians=True)
        return [c.area for c in outer.difference(translate(inner, rotors.centre_distance)).geoms if c.area > 0.5]

    # With two lobes astride the line of centres the inner rotor's tip parts the small chamber in two; an even count has
    # two lobes astride it on the far side as well, around the large chamber.
    found = sorted(chambers(pi / lobes))
    smallest, largest = sum(found[:2]), found[-1]
    computed = {"largest": largest, "smallest": smallest}
    assert misses(expected, computed) == []
    assert rotors.chamber_swing == pytest.approx(largest - smallest, rel=1e-5)


@pytest.mark.parametrize(("given", "expected"), cases("rotors", "lobe rotors"))
def test_lobe_rotors(given, expected):
    rotor = LobeRotor(given["lobes"], given["pitch_radius"])
    pair = LobeRotors(rotor, given["width"], Bore(10.0))
    computed = {
        "describing": rotor.describing_radius,
        "tip": rotor.outline.r_max,
        "root": rotor.outline.r_min,
        "area": rotor.outline.area,
        "volume": pair.displacement,
        "utilisation": pair.displacement / (2 * pi * rotor.tip_radius**2 * given["width"]),
    }
    assert misses(expected, computed) == []


def test_every_kind_of_case_is_tried():
    assert kinds("rotors") == {"rotor set", "chambers", "lobe rotors"}
