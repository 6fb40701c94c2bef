"""Building and writing two wheels, against the scripts a CadQuery user writes today. Run it; it is no test.

    python tests/benchmarks/build.py [ROUNDS]

Both make the same wheel: 60 teeth, module 1.5 mm, 12 mm wide, bore 20 mm with a 6 x 2.8 mm keyway. The plain script
leaves the root corners sharp (4 faces a tooth); ours carries the true fillets (6 faces a tooth). Then a helical wheel
of 120 teeth, module 1.5 mm, 20 mm wide, 20 deg, without a bore. Times are the best of all rounds, taken in turn on the
same machine; only the ratios mean anything.
"""

import sys
import tempfile
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import partial
from math import acos, cos, degrees, pi, sin, tan
from pathlib import Path
from time import perf_counter

import cadquery as cq
import numpy as np

from gearsolid.output.deviation import flank_deviation
from gearsolid.output.step import write_step
from gearsolid.output.stl import write_stl
from gearsolid.pairs.blank import Blank
from gearsolid.pairs.helix import member_body, twist_rate
from gearsolid.pairs.part import Body
from gearsolid.shop.bore import Bore
from gearsolid.solids.body import body_solid, build_solid
from gearsolid.solids.check import exact_volume, is_valid
from gearsolid.teeth.involute import InvoluteGear

TEETH, MODULE, WIDTH, BORE, KEY_WIDTH, KEY_DEPTH = 60, 1.5, 12.0, 20.0, 6.0, 2.8
FACET_TOL = 0.01


def _inv(a: float) -> float:
    return tan(a) - a


def plain_outline(z: int, m: float, alpha: float = pi / 9, points: int = 15) -> cq.Workplane:
    """Flanks as splines through points, tip and root as three-point arcs; root circle outside the base circle."""
    r, ra, rf = m * z / 2, m * z / 2 + m, m * z / 2 - 1.25 * m
    rb = r * cos(alpha)
    half = pi / (2 * z) + _inv(alpha)
    radii = np.linspace(max(rb, rf), ra, points)
    theta = np.array([half - _inv(acos(min(1.0, rb / q))) for q in radii])
    w = cq.Workplane("XY")
    for k in range(z):
        c = 2 * pi * k / z
        up = [(q * cos(c - t), q * sin(c - t)) for q, t in zip(radii, theta, strict=True)]
        down = [(q * cos(c + t), q * sin(c + t)) for q, t in zip(radii[::-1], theta[::-1], strict=True)]
        w = w.moveTo(*up[0]) if k == 0 else w.threePointArc((rf * cos(c - pi / z), rf * sin(c - pi / z)), up[0])
        w = w.spline(up[1:], includeCurrent=True)
        w = w.threePointArc((ra * cos(c), ra * sin(c)), down[0])
        w = w.spline(down[1:], includeCurrent=True)
    first = (rf * cos(-theta[0]), rf * sin(-theta[0]))
    return w.threePointArc((rf * cos(-pi / z), rf * sin(-pi / z)), first).close()


def plain_wheel() -> cq.Workplane:
    """The plain script: extrude, then bore and keyway by Booleans."""
    body = plain_outline(TEETH, MODULE).extrude(WIDTH)
    body = body.faces(">Z").workplane(origin=(0, 0, WIDTH)).circle(BORE / 2).cutThruAll()
    reach = BORE / 2 + KEY_DEPTH
    return body.faces(">Z").workplane(origin=(0, 0, WIDTH)).center(0, reach / 2).rect(KEY_WIDTH, reach).cutThruAll()


def our_body() -> Body:
    """The same wheel from its basic rack and the key table."""
    return Body(InvoluteGear(TEETH, MODULE).outline, WIDTH, bore=Bore.keyed(BORE))


HELICAL = InvoluteGear(120, 1.5, helix_angle_deg=20)
HELICAL_WIDTH = 20.0


def plain_helical_wheel() -> cq.Workplane:
    """The plain script: the transverse section, extruded with a twist."""
    twist = degrees(twist_rate(HELICAL) * HELICAL_WIDTH)
    section = plain_outline(HELICAL.teeth, HELICAL.pitch / pi, HELICAL.transverse_angle)
    return section.twistExtrude(HELICAL_WIDTH, twist)


def our_helical_body() -> Body:
    """The same wheel from its basic rack, drawn anew."""
    return member_body(replace(HELICAL), Blank(HELICAL_WIDTH))


@dataclass
class Row:
    """One line of the table: best times [s] of the plain script and of ours, or sizes."""

    what: str
    plain: float = float("inf")
    ours: float = float("inf")

    def time(self, plain: Callable[[], object], ours: Callable[[], object]) -> None:
        """Run both once and keep the best of each."""
        self.plain, self.ours = min(self.plain, _seconds(plain)), min(self.ours, _seconds(ours))

    def text(self, unit: str, scale: float) -> str:
        ratio = self.plain / self.ours
        return f"{self.what:<34}{self.plain * scale:>10.1f}{self.ours * scale:>10.1f} {unit:<4}{ratio:>8.1f}"


def _seconds(action: Callable[[], object]) -> float:
    start = perf_counter()
    action()
    return perf_counter() - start


def _check(shape: cq.Shape) -> None:
    is_valid(shape)
    exact_volume(shape)


def main(rounds: int) -> None:
    """Time both ways and print the table."""
    build, checked = Row("build"), Row("build, checker, volume")
    helical, helical_checked = Row("helical: build"), Row("helical: build, checker, volume")
    step, stl = Row("write STEP (ours reads it back)"), Row("write STL (ours reads it back)")
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        plain_step, our_step, plain_stl, our_stl = (folder / n for n in ("p.step", "o.step", "p.stl", "o.stl"))
        for _ in range(rounds):
            build.time(plain_wheel, lambda: build_solid(our_body()))
            plain, body = plain_wheel(), our_body()
            checked.time(lambda: _check(plain_wheel().val()), lambda: body_solid(our_body()))
            helical.time(plain_helical_wheel, lambda: build_solid(our_helical_body()))
            helical_checked.time(lambda: _check(plain_helical_wheel().val()), lambda: body_solid(our_helical_body()))
            solid = body_solid(body)
            step.time(
                partial(cq.exporters.export, plain, str(plain_step)),
                partial(write_step, our_step, cq.Assembly(solid, name="wheel")),
            )
            stl.time(
                partial(cq.exporters.export, plain, str(plain_stl), tolerance=FACET_TOL, angularTolerance=0.1),
                partial(write_stl, our_stl, body, FACET_TOL),
            )
        sizes = [
            Row("STEP size", plain_step.stat().st_size, our_step.stat().st_size),
            Row("STL size", plain_stl.stat().st_size, our_stl.stat().st_size),
        ]
    faces = Row("STEP size per face", sizes[0].plain / len(plain.val().Faces()), sizes[0].ours / len(solid.Faces()))
    twisted = our_helical_body()
    twisted_error = flank_deviation(body_solid(twisted), twisted)
    lines = [
        f"{f'best of {rounds}':<34}{'plain':>10}{'ours':>10}     {'ratio':>8}",
        *(row.text("ms", 1e3) for row in (build, checked, step, stl, helical, helical_checked)),
        *(row.text("kB", 1e-3) for row in (*sizes, faces)),
        f"our flanks lie within {flank_deviation(solid, body) * 1e3:.3f} um of the exact outline",
        f"our helical flanks lie within {twisted_error * 1e3:.3f} um of the exact helicoid",
    ]
    sys.stdout.write("\n".join(lines) + "\n")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 3)
