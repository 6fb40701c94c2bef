from dataclasses import replace
from math import cos, degrees, pi, radians, sin, tan

import numpy as np
import pytest
from golden import Printed, cases, kinds, misses
from scipy.optimize import brentq

from gearsolid.shop.backlash import least_normal_play
from gearsolid.shop.iso1328 import flank_tolerances
from gearsolid.teeth import inspection
from gearsolid.teeth import involute_relations as relations
from gearsolid.teeth.internal import InternalGear
from gearsolid.teeth.involute import InvoluteGear
from gearsolid.teeth.involute_pair import InvolutePair
from gearsolid.teeth.involute_relations import inv, inverse_inv, reach
from gearsolid.teeth.pinion_cutter import PinionCutter
from gearsolid.teeth.rack import ISO53_A, ISO53_B, ISO53_C, ISO53_D, BasicRack
from gearsolid.teeth.rack_drive import RackDrive

PROFILES = {"A": ISO53_A, "B": ISO53_B, "C": ISO53_C, "D": ISO53_D}
INCH = 25.4


def gear_of(*, module, teeth, shift=0.0, helix_deg=0.0, **rest):
    return InvoluteGear(teeth, module, profile_shift=shift, helix_angle_deg=helix_deg, **rest)


def circles(pair):
    """Diameters and tooth heights of both members, named as in ISO 21771 with the member's number."""
    found = {}
    for k, (member, working) in enumerate(zip((pair.gear, pair.mate), pair.working_radii, strict=True), 1):
        found |= {
            f"d{k}": 2 * member.reference_radius,
            f"db{k}": 2 * member.base_radius,
            f"dw{k}": 2 * working,
            f"da{k}": 2 * member.tip_radius,
            f"df{k}": 2 * member.root_radius,
            f"ha{k}": abs(member.tip_radius - member.reference_radius),
            f"dFf{k}": 2 * member.form_radius,
            f"dNf{k}": 2 * pair.active_radii[k - 1],
        }
    return found


def working(pair):
    eps = pair.nominal_contact_ratio
    return {
        "at": degrees(pair.gear.transverse_angle),
        "inv awt": inv(pair.working_angle),
        "awt": degrees(pair.working_angle),
        "a": pair.centre_distance,
        "y": abs(pair.centre_distance - pair.reference_distance) / pair.gear.module,
        "h": abs(pair.gear.tip_radius - pair.gear.root_radius),
        "eps_alpha": eps,
        "path": eps * pair.gear.base_pitch,
        "turn1": eps * 360 / pair.gear.teeth,
        "turn2": eps * 360 / pair.mate.teeth,
    }


def external(inputs, *, shortened=True):
    """An external pair; its tips are shortened so that the rack's bottom clearance stays."""
    helix = inputs.get("helix_deg", 0.0)
    gears = [
        gear_of(module=inputs["module"], teeth=z, shift=x, helix_deg=sign * helix)
        for z, x, sign in zip(inputs["teeth"], inputs.get("shifts", (0, 0)), (1, -1), strict=True)
    ]
    pair = InvolutePair(*gears, inputs.get("distance"))
    if not shortened:
        return pair
    cut = pair.clearance_shortening
    return InvolutePair(*(replace(g, tip_shortening=cut) for g in gears), pair.centre_distance)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_function"))
def test_involute_function(inputs, expected):
    angle = radians(inputs["angle_deg"])
    assert not misses(expected, {"inv": inv(angle)})
    assert abs(float(inverse_inv(float(expected.values["inv"]))) - angle) < 1e-6


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_racks", "basic rack"))
def test_basic_racks(inputs, expected):
    rack = PROFILES[inputs["profile"]]
    assert not misses(expected, {"haP": rack.addendum, "hfP": rack.dedendum, "rfP": rack.root_radius})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_racks", "straight dedendum"))
def test_straight_dedendum(inputs, expected):
    assert not misses(expected, {"hFfP": PROFILES[inputs["profile"]].straight_dedendum(20)})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_racks", "largest root radius"))
def test_largest_root_radius(inputs, expected):
    assert not misses(expected, {"rfP_max": PROFILES[inputs["profile"]].largest_root_radius(20)})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_racks", "rack drive"))
def test_rack_drive(inputs, expected):
    pinion = gear_of(**{k: v for k, v in inputs.items() if k != "height"})
    drive = RackDrive(pinion, inputs["height"])
    computed = {
        "at": degrees(pinion.transverse_angle),
        "axis height": drive.axis_height,
        "d": 2 * pinion.reference_radius,
        "db": 2 * pinion.base_radius,
        "da": 2 * pinion.tip_radius,
        "df": 2 * pinion.root_radius,
        "gear addendum": pinion.tip_radius - pinion.reference_radius,
        "rack addendum": drive.rack_addendum,
        "depth": pinion.tip_radius - pinion.root_radius,
        "contact ratio": drive.contact_ratio,
    }
    assert not misses(expected, computed)
    assert drive.travel_per_turn == pytest.approx(2 * pi * pinion.reference_radius)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_pairs", "external pair"))
def test_external_pairs(inputs, expected):
    pair = external(inputs)
    assert not misses(expected, circles(pair) | working(pair))


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_pairs", "shifts at a distance"))
def test_shifts_at_a_distance(inputs, expected):
    pair = external(inputs, shortened=False)
    computed = circles(pair) | working(pair)
    computed |= {"ad": pair.reference_distance, "inv at": inv(pair.gear.transverse_angle), "shift sum": pair.shift_sum}
    shifted = external(inputs | {"shifts": (pair.shift_sum / 2, pair.shift_sum / 2)}, shortened=False)
    computed["k"] = -shifted.clearance_shortening / inputs["module"]
    assert not misses(expected, computed)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_pairs", "inch pair"))
def test_inch_pair(inputs, expected):
    module = INCH / inputs["diametral_pitch"]
    pair = external({"module": module, "teeth": inputs["teeth"]})
    both = circles(pair) | working(pair)
    computed = {k: both[k] / INCH for k in ("d1", "d2", "da1", "da2", "a", "path")} | {"eps_alpha": both["eps_alpha"]}
    computed["addendum"] = both["ha1"] / INCH
    computed["dedendum"] = (pair.gear.reference_radius - pair.gear.root_radius) / INCH
    wider = InvolutePair(pair.gear, pair.mate, inputs["wider"] * pair.centre_distance)
    computed["awt wider"] = degrees(wider.working_angle)
    assert not misses(expected, computed)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_pairs", "overlap"))
def test_overlap(inputs, expected):
    ratio = relations.overlap_ratio(inputs["face_width"], inputs["module"], radians(inputs["helix_deg"]))
    assert not misses(expected, {"eps_beta": ratio})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_pairs", "crossed addendum"))
def test_addendum_of_the_normal_or_of_the_transverse_pitch(inputs, expected):
    helix = radians(inputs["helix_deg"])
    module = INCH / inputs["transverse_pitch"] * cos(helix)
    addendum = 1.0 if inputs["addendum"] == "1/Pn" else 1 / cos(helix)
    rack = BasicRack(addendum, addendum + 0.157, 0.2)
    pair = InvolutePair(
        *(
            InvoluteGear(z, module, inputs["pressure_angle_deg"], helix_angle_deg=sign * inputs["helix_deg"], rack=rack)
            for z, sign in zip(inputs["teeth"], (1, -1), strict=True)
        )
    )
    computed = working(pair) | {"addendum in": addendum * module / INCH}
    computed["eps_beta"] = relations.overlap_ratio(inputs["face_width_in"] * INCH, module, helix)
    assert not misses(expected, computed)


def ring_pair(inputs):
    z1, z2 = inputs["teeth"]
    ring = InternalGear(z2, inputs["module"], profile_shift=-inputs["outward_shift2"])
    return InvolutePair(InvoluteGear(z1, inputs["module"], profile_shift=inputs["shift1"]), ring)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_rings", "ring pair"))
def test_ring_pairs(inputs, expected):
    pair = ring_pair(inputs)
    tangents = pair.centre_distance * sin(pair.working_angle)
    tip_reach = reach(pair.mate.tip_radius, pair.mate.base_radius)
    last = reach(pair.gear.tip_radius, pair.gear.base_radius)
    computed = circles(pair) | working(pair)
    computed |= {
        "ring tip reach": tip_reach,
        "base tangents apart": tangents,
        "eps_alpha to T1": (last - max(0.0, tip_reach - tangents)) / pair.gear.base_pitch,
        "involute margin": pair.margins.involute,
        "trochoid margin": pair.margins.trochoid,
        "trimming margin": pair.margins.trimming,
    }
    assert not misses(expected, computed)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_rings", "ring cut"))
def test_ring_form_by_formula(inputs, expected):
    """The sharp cutter's tip meets the ring's flank like a mate's tip does."""
    m, z2, z0, angle = inputs["module"], inputs["teeth"], inputs["cutter_teeth"], radians(20)
    shifts = inputs["cutter_shift"] - inputs["outward_shift"]
    distance = -relations.centre_distance(z0, -z2, shifts, angle, module=m)
    working_angle = relations.working_angle(z0, -z2, shifts, angle)
    tip = m * (z0 / 2 + 1.25 + inputs["cutter_shift"])
    form = relations.active_radius(
        tip=tip,
        base=m * z0 / 2 * cos(angle),
        own_base=-m * z2 / 2 * cos(angle),
        distance=-distance,
        working=working_angle,
    )
    computed = {"a0": distance, "aw0": degrees(working_angle), "df": 2 * (distance + tip), "dFf": 2 * form}
    assert not misses(expected, computed)


def test_drawn_ring_tends_to_the_form_of_the_sharp_cutter():
    """The sharper the cutter, the nearer the drawn form circle comes to the printed one."""
    _, expected = cases("involute_rings", "ring cut")[1].values
    diameters = [
        2 * InternalGear(60, 3, profile_shift=-0.3, cutter=PinionCutter(18, 0.1, rounding)).form_radius
        for rounding in (1e-1, 1e-2, 1e-3, 1e-4, 1e-7)
    ]
    gaps = float(expected.values["dFf"]) - np.array(diameters)
    assert np.all(np.diff(gaps[:4]) < 0)
    assert not misses(Printed({"dFf": expected.values["dFf"]}), {"dFf": diameters[-1]})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_rings", "least ring teeth"))
def test_least_ring_teeth(inputs, expected):
    def depth_left(teeth):
        return teeth / 2 * (1 - cos(radians(inputs["pressure_angle_deg"]))) - 1

    assert not misses(expected, {"z": brentq(depth_left, 10, 100)})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_inspection", "span"))
def test_span(inputs, expected):
    k = inputs["span_teeth"]
    gear = gear_of(**{n: v for n, v in inputs.items() if n != "span_teeth"})
    teeth = inspection.ideal_span_teeth(gear)
    for measure in (inspection.span, inspection.drawn_span):
        computed = {"k": teeth, "W": measure(gear, k), "at": degrees(gear.transverse_angle)}
        assert not misses(expected, computed), measure.__name__
    assert round(teeth) == k


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_inspection", "pins"))
def test_pins(inputs, expected):
    sizes = {k: v for k, v in inputs.items() if k not in ("pin", "outward_shift")}
    ring = "outward_shift" in inputs
    member = (
        InternalGear(inputs["teeth"], inputs["module"], profile_shift=-inputs["outward_shift"])
        if ring
        else gear_of(**sizes)
    )
    pin = inputs["pin"]
    for measure in (inspection.pin_dimension, inspection.drawn_pin_dimension):
        dimension = measure(member, pin)
        odd = cos(pi / (2 * member.teeth)) if member.teeth % 2 else 1
        angle = np.arccos(member.base_radius / ((dimension - member.hand * pin) / 2 / odd))
        computed = {
            "ideal pin": inspection.ideal_pin(member),
            "M": dimension,
            "aK": degrees(angle),
            "inv aK": inv(angle),
        }
        assert not misses(expected, computed), measure.__name__


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_inspection", "rack pin"))
def test_rack_pin(inputs, expected):
    assert not misses(expected, {"M": inspection.rack_pin_height(pressure_angle_deg=20, **inputs)})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_inspection", "chord"))
def test_chord(inputs, expected):
    gear = gear_of(**inputs)
    helix = cos(radians(gear.helix_angle_deg))
    normal = gear.thickness * helix
    virtual = gear.teeth / helix**3
    computed = {
        "ha": gear.tip_radius - gear.reference_radius,
        "sn": normal,
        "zv": virtual,
        "q": degrees(normal / (virtual * gear.module)),
    }
    for measure in (inspection.chord, inspection.drawn_chord):
        if gear.helix_angle_deg and measure is inspection.drawn_chord:
            continue
        computed["sc"], computed["hc"] = measure(gear)
        assert not misses(expected, computed), measure.__name__


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_inspection", "tip land"))
def test_tip_land(inputs, expected):
    plain = gear_of(module=inputs["module"], teeth=inputs["teeth"], shift=inputs["shift"])
    gear = replace(plain, tip_shortening=plain.tip_radius - inputs["tip_diameter"] / 2)
    tip = next(p.curve for p in gear.outline.pieces if p.role == "tip")
    assert not misses(expected, {"sa": gear.tip_land})
    assert not misses(expected, {"sa": abs(tip.sweep) * gear.tip_radius})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_undercut", "least teeth"))
def test_least_teeth(inputs, expected):
    angle = inputs["pressure_angle_deg"]
    # A rack of any rounding whose straight flank ends one module below the datum line.
    one_deep = BasicRack(1, 1 + 0.2 * (1 - sin(radians(angle))), 0.2)
    rack = PROFILES[inputs["profile"]] if "profile" in inputs else one_deep
    gear = InvoluteGear(30, 2, angle, helix_angle_deg=inputs["helix_deg"], rack=rack)
    assert not misses(expected, {"z": gear.least_teeth})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_undercut", "least shift"))
def test_least_shift(inputs, expected):
    rack = BasicRack(1, 1 + 0.2 * (1 - sin(radians(20))), 0.2)
    assert not misses(expected, {"x": InvoluteGear(inputs["teeth"], 2, rack=rack).least_shift})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_play", "generating shifts"))
def test_generating_shifts(inputs, expected):
    """Teeth thinned until the flanks stand the given play apart have the generating shifts printed."""
    total = external(inputs, shortened=False).shift_sum
    helix, angle = radians(inputs["helix_deg"]), radians(20)
    arc = inputs.get("normal_arc") or inputs["normal_play"] / cos(angle)
    gears = [
        gear_of(module=3.5, teeth=z, shift=x, helix_deg=sign * 21, tooth_thinning=share * arc / cos(helix))
        for z, x, sign, share in zip(inputs["teeth"], (0.4, total - 0.4), (1, -1), (0.3, 0.7), strict=True)
    ]
    pair = InvolutePair(*gears, inputs["distance"])
    assert not misses(expected, {"sum xE": sum(g.generating_shift for g in gears)})
    assert pair.normal_play == pytest.approx(arc * cos(angle), abs=1e-12)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_play", "wider distance"))
def test_play_of_a_wider_distance(inputs, expected):
    pair = external(inputs, shortened=False)
    linear = 2 * (pair.centre_distance - pair.reference_distance) * tan(radians(20))
    assert not misses(expected, {"jwt": pair.play, "jbn": pair.normal_play, "linear": linear})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_play", "thickness allowance"))
def test_thickness_allowance(inputs, expected):
    """The printed allowance, taken off both gears, leaves the play it was made for."""
    thin = -float(expected.values["Esns"])
    gears = [gear_of(module=2, teeth=z, tooth_thinning=thin) for z in (20, 40)]
    assert InvolutePair(*gears).normal_play == pytest.approx(inputs["normal_play"], abs=1e-4)


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_play", "least play"))
def test_least_play(inputs, expected):
    assert not misses(expected, {"jbn": least_normal_play(inputs["module"], inputs["distance"])})


@pytest.mark.parametrize(("inputs", "expected"), cases("involute_fillets", "fillet"))
def test_fillets(inputs, expected):
    """Printed points stand on the drawn fillet; its ends are the printed ones. The y axis halves the tooth space."""
    m, rack = inputs["module"], BasicRack(1, inputs["dedendum"], inputs["root_radius"])
    gear = gear_of(module=m, teeth=inputs["teeth"], shift=inputs["shift"], rack=rack)
    fillet = next(p.curve for p in gear.outline.pieces if p.role == "fillet")
    bracket = gear.reference_radius * sin(radians(20)) - m * (rack.straight_dedendum(20) - inputs["shift"]) / sin(
        radians(20)
    )
    computed = {
        "df": 2 * gear.root_radius,
        "dFf": 2 * gear.form_radius,
        "E": m * rack.half_tip_land(20),
        "bracket/2": bracket,
    }
    if "first x" in expected.values:
        printed = complex(float(expected.values["middle x"]), float(expected.values["middle y"]))
        middle = brentq(lambda t: abs(complex(fillet.point(np.asarray(t)))) - abs(printed), *fillet.span)
        for name, z in (
            ("first", fillet.start),
            ("middle", complex(fillet.point(np.asarray(middle)))),
            ("last", fillet.end),
        ):
            # The drawn fillet lies left of the space's middle line; the printed one right of it.
            w = np.conj(z * np.exp(1j * np.pi / gear.teeth)) * 1j
            computed |= {f"{name} x": w.real, f"{name} y": w.imag}
    assert not misses(expected, computed)


@pytest.mark.parametrize(("inputs", "expected"), cases("iso1328", "2013"))
def test_iso1328_tolerances(inputs, expected):
    found = flank_tolerances(**inputs, teeth=50)
    names = ("fpT", "FpT", "fHaT", "ffaT", "FaT", "fHbT", "ffbT", "FbT")
    values = (
        found.single_pitch,
        found.cumulative_pitch,
        found.profile_slope,
        found.profile_form,
        found.profile,
        found.helix_slope,
        found.helix_form,
        found.helix,
    )
    assert not misses(expected, dict(zip(names, values, strict=True)))


@pytest.mark.parametrize(("inputs", "expected"), cases("iso1328", "1995"))
def test_iso1328_classes_stay_close_to_the_grades_of_1995(inputs, expected):
    """A class of 2013 is nearer to the grade of the same number than to its neighbours, a step of sqrt(2) away."""
    found = flank_tolerances(**inputs, teeth=30)
    near = {"fpT": found.single_pitch, "FpT": found.cumulative_pitch, "FaT": found.profile, "FbT": found.helix}
    for name, value in near.items():
        assert abs(np.log(value / float(expected.values[name]))) < np.log(2) / 4, name


FILES = {
    "involute_function": {"involute function"},
    "involute_racks": {"basic rack", "straight dedendum", "largest root radius", "rack drive"},
    "involute_pairs": {"external pair", "shifts at a distance", "inch pair", "overlap", "crossed addendum"},
    "involute_rings": {"ring pair", "ring cut", "least ring teeth"},
    "involute_inspection": {"span", "pins", "rack pin", "chord", "tip land"},
    "involute_undercut": {"least teeth", "least shift"},
    "involute_play": {"generating shifts", "wider distance", "thickness allowance", "least play"},
    "involute_fillets": {"fillet"},
    "iso1328": {"2013", "1995"},
}


@pytest.mark.parametrize(("name", "tried"), FILES.items(), ids=FILES)
def test_every_kind_of_case_is_tried(name, tried):
    assert kinds(name) == tried


def test_a_value_off_by_one_in_the_last_digit_is_a_miss():
    assert misses(Printed({"a": "56.4999"}), {"a": 56.4998}) == ["a: printed 56.4999, computed 56.4998000"]
    assert not misses(Printed({"a": "56.4999"}), {"a": 56.49994})
    assert not misses(Printed({"a": "56.4999"}, {"a": 1}), {"a": 56.4998})
    assert misses(Printed({"a": "56.4999"}, {"a": 1}), {"a": 56.49979})
    assert misses(Printed({"z": "36"}), {"z": 36.001})
    assert misses(Printed({"m": "nan"}), {"m": 0.0})
