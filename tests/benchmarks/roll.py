"""How fast the roll test is beside what one writes without it, in one run: print a table of times and ratios.

    python tests/benchmarks/roll.py [POSITIONS]

The pair is 20/30 teeth, module 1.5, centre distance 37.55 mm. The solid loop intersects the two bodies as a CAD script
does today, at a few of the positions and scaled to all; the polygon loop clips dense polygons with a general library.
"""

import sys
import time
from math import degrees, pi

import cadquery as cq
import numpy as np
import shapely
from shapely.affinity import rotate, translate

from gearsolid.contact.roll import roll_engagements
from gearsolid.pairs.blank import Blank, body_of
from gearsolid.pairs.engagement import Engagement, engage
from gearsolid.pairs.motion import Motion
from gearsolid.solids.body import body_solid
from gearsolid.teeth.involute import InvoluteGear

Z1, Z2, MODULE, WIDTH, DISTANCE = 20, 30, 1.5, 5.0, 37.55
SOLID_SAMPLES = 12
POINTS_PER_PITCH = 160


def pair() -> Engagement:
    a, b = InvoluteGear(Z1, MODULE), InvoluteGear(Z2, MODULE)
    wheel = Motion(centre_radius=DISTANCE, angle=pi + pi / Z2, rate=-Z1 / Z2)
    return engage("pinion", a.outline, Motion(rate=1.0), "wheel", b.outline, wheel)


def seconds(job, repeats: int = 1) -> float:
    best = np.inf
    for _ in range(repeats):
        start = time.perf_counter()
        job()
        best = min(best, time.perf_counter() - start)
    return best


def solid_loop(e: Engagement, positions: int) -> float:
    """Seconds for all positions, from a few of them."""
    a, b = (body_solid(body_of(o, Blank(WIDTH))) for o in (e.a, e.b))
    axis = (cq.Vector(0, 0, 0), cq.Vector(0, 0, 1))

    def run() -> None:
        for k in range(SOLID_SAMPLES):
            psi = e.period * k / SOLID_SAMPLES
            placed = b.rotate(*axis, degrees(e.angle_b + e.rate_b * psi)).moved(cq.Location(cq.Vector(DISTANCE, 0, 0)))
            a.rotate(*axis, degrees(psi)).intersect(placed).Volume()

    return seconds(run) / SOLID_SAMPLES * positions


def polygon_loop(e: Engagement, positions: int) -> float:
    a, b = (_polygon(o) for o in (e.a, e.b))

    def run() -> None:
        for k in range(positions):
            psi = e.period * k / positions
            turned = rotate(b, degrees(e.angle_b + e.rate_b * psi), origin=(0, 0))
            placed = translate(turned, DISTANCE)
            _ = rotate(a, degrees(psi), origin=(0, 0)).intersection(placed).area

    return seconds(run)


def _polygon(outline):
    each = POINTS_PER_PITCH // len(outline.pieces)
    pitch = np.concatenate([p.curve.point(np.linspace(*p.curve.span, each, endpoint=False)) for p in outline.pieces])
    z = np.concatenate([pitch * f for f in outline.step ** np.arange(outline.order)])
    return shapely.Polygon(np.column_stack([z.real, z.imag]))


def main(positions: int) -> None:
    first = seconds(lambda: roll_engagements([pair()]))
    e = pair()
    ours = seconds(lambda: roll_engagements([e]), 7)
    solid, polygon = solid_loop(e, positions), polygon_loop(e, positions)
    found = roll_engagements([e]).contacts[0]
    print(f"{'':46}{'ms':>12}{'ratio':>9}")
    print(f"{'roll test, outlines ready':46}{ours * 1e3:12.1f}{1:9.0f}")
    print(f"{'roll test with both outlines made':46}{first * 1e3:12.1f}{first / ours:9.1f}")
    print(f"{f'solids intersected at {positions} positions':46}{solid * 1e3:12.1f}{solid / ours:9.0f}")
    print(f"{f'polygons clipped at {positions} positions':46}{polygon * 1e3:12.1f}{polygon / ours:9.0f}")
    print(
        f"least clearance {found.clearance:.7f} mm, play {found.play:.7f} mm, contact ratio {found.contact_ratio:.5f}"
    )


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 360)
