"""Pictures of a machine and its parts as SVG: the turning front view, the tightest place, the sheet of a part."""

from collections.abc import Sequence
from html import escape
from math import degrees, radians

import numpy as np

from gearsolid.contact.result import Contact
from gearsolid.curves.loops import disc
from gearsolid.curves.outline import Outline
from gearsolid.output.cut import material
from gearsolid.output.made import Made, distinct, pitch_radii
from gearsolid.output.picture import path
from gearsolid.pairs.engagement import Engagement
from gearsolid.pairs.machine import Machine
from gearsolid.pairs.part import Body, Part

Band = tuple[float, float]

# Part sheet: sizes in its own units, about a pixel on the screen.
_FRONT = 230.0
_SECTION_MOST = 320.0
_MARGIN, _GAP, _DIMENSIONS = 18.0, 74.0, 92.0

# A picture on its own: light colours that also stand on a dark page, flanks as true as a large screen shows them.
_PICTURE_TOL = 0.01
_PICTURE_STYLE = (
    ".face,.boss{fill:var(--tint);fill-rule:evenodd;stroke:#24313a;stroke-width:.12}.boss{fill-opacity:.6}"
    ".edge,.pitch,.place{fill:none;stroke:#24313a;stroke-width:.1}.pitch{stroke-dasharray:1.2 .4 .3 .4}"
    ".mark{fill:#fff;stroke:#24313a;stroke-width:.1}.place{stroke:#ad3b2b;stroke-width:.3}"
)


def shapes(made: Sequence[Made], tol: float = 1e-4) -> str:
    """Definitions that the other pictures refer to: one group a distinct part, `shape-0` and on.

    Args:
        made: the distinct parts.
        tol: largest distance between a drawn and a true flank [mm].
    """
    return "".join(f'<g id="shape-{k}">{_shape(m.body, tol)}</g>' for k, m in enumerate(made))


def picture(machine: Machine, contact: Contact) -> str:
    """The front view as an SVG file of its own, standing where a contact is tightest.

    Args:
        machine: the machine.
        contact: the contact to ring.
    """
    made = distinct(machine.parts)
    view = machine_view(machine, made, contact)
    head, rest = view.split(">", 1)
    return (
        f'{head} xmlns="http://www.w3.org/2000/svg" width="640"><style>{_PICTURE_STYLE}</style>'
        f"<defs>{shapes(made, _PICTURE_TOL)}</defs>{rest}\n"
    )


def machine_view(machine: Machine, made: Sequence[Made], contact: Contact) -> str:
    """The whole machine from the front, each part a group the page can move, and the tightest place ringed."""
    reach = 1.03 * max(p.motion.centre_radius + p.body.outer.r_max for p in machine.parts)
    left, right, low, high = _extent(machine)
    pad = 0.02 * reach
    box = f"{left - pad:.4f} {-high - pad:.4f} {right - left + 2 * pad:.4f} {high - low + 2 * pad:.4f}"
    psi = radians(contact.input_angle)
    groups = [
        f'<g class="part" data-part="{k}" style="{_tint(part)}" transform="{_pose(part, psi)}">'
        f'<use href="#shape-{shape}"/>{_mark(part)}{_pitch_circles(machine, part)}</g>'
        for k, part, shape in _from_below(machine, made)
    ]
    ring = f'<circle class="place" cx="{contact.place.real:.4f}" cy="{contact.place.imag:.4f}" r="{0.03 * reach:.4f}"/>'
    return (
        f'<svg id="machine" viewBox="{box}" role="img" aria-label="{escape(machine.title)}, front view">'
        f'<g transform="scale(1 -1)">{"".join(groups)}{ring}</g></svg>'
    )


def close_view(engagement: Engagement, contact: Contact, half: float) -> str:
    """The two outlines of a contact near its tightest place, standing at that input angle, with a scale bar.

    Args:
        engagement: the outlines and how they turn.
        contact: what the roll test found on them.
        half: half the width of the window [mm].
    """
    x, y = contact.place.real, -contact.place.imag
    first, second = _standing(engagement, radians(contact.input_angle))
    clip = f"first-{half:.6g}".replace(".", "-")
    unit = half / 100
    bar = _round_down(0.6 * half)
    bx, by, up = x - 90 * unit, y + 90 * unit, y + 85 * unit
    return (
        f'<svg class="close" viewBox="{x - half:.5f} {y - half:.5f} {2 * half:.5f} {2 * half:.5f}" role="img" '
        f'aria-label="{escape(contact.name_a)} with {escape(contact.name_b)} at the tightest place, window '
        f'{2 * half:.3g} mm wide"><clipPath id="{clip}"><path {first}/></clipPath><g transform="scale(1 -1)">'
        f'<path class="face first" {first}/><path class="face second" {second}/></g>'
        f'<g clip-path="url(#{clip})" transform="scale(1 -1)"><path class="shared" {second}/></g>'
        f'<circle class="place" cx="{x:.5f}" cy="{y:.5f}" r="{9 * unit:.5f}"/>'
        f'<path class="bar" d="M{bx:.5f} {by:.5f}h{bar:.5f}"/>'
        f'<text class="bar-text" x="{bx:.5f}" y="{up:.5f}" font-size="{9 * unit:.5f}">{bar:g} mm</text></svg>'
    )


def _standing(e: Engagement, psi: float) -> tuple[str, str]:
    """Path and place, as attributes, of the two outlines of an engagement at input angle psi [rad]."""
    frame = e.frame_rate * psi
    places = ((e.a, e.centre_a, e.angle_a + e.rate_a * psi), (e.b, e.centre_b, e.angle_b + e.rate_b * psi))
    first, second = (
        f'd="{_filled(outline)}" transform="{_turned(centre * complex(np.exp(1j * frame)), angle + frame)}"'
        for outline, centre, angle in places
    )
    return first, second


def windows(engagement: Engagement, contact: Contact) -> Band:
    """Half widths [mm] of the two close views: about a pitch, and close enough to see the gap."""
    pitch = min(2 * np.pi * o.r_max / o.order for o in (engagement.a, engagement.b))
    return 0.9 * pitch, float(np.clip(8 * abs(contact.clearance), pitch / 60, pitch / 6))


def part_view(made: Made, index: int) -> str:
    """A part from the front and cut along its vertical axis, with its main dimensions.

    Its own x axis, where the keyway lies, points up.
    """
    body = made.body
    tall, deep = 2 * body.outer.r_max, body.width + max((b.height for b in body.bosses), default=0.0)
    scale = min(_FRONT / tall, _SECTION_MOST / deep)
    r = tall / 2 * scale
    cx, cy = _MARGIN + r, _MARGIN + 14 + r
    sx = cx + r + _GAP
    width, height = sx + deep * scale + _DIMENSIONS, cy + r + 44
    bits = [
        f'<svg class="sheet" viewBox="0 0 {width:.2f} {height:.2f}" style="max-width:{width * 1.15:.0f}px" role="img" '
        f'aria-label="{escape(made.name)}, front view and section">',
        f'<g class="part" style="{_tint(made.parts[0])}" transform="translate({cx:.3f} {cy:.3f}) scale({scale:.6f} '
        f'{-scale:.6f}) rotate(90)"><use href="#shape-{index}"/></g>',
        _axis_cross(cx, cy, r),
        f'<text class="letter" x="{cx + 6:.2f}" y="{cy - r - 8:.2f}">A</text>'
        f'<text class="letter" x="{cx + 6:.2f}" y="{cy + r + 16:.2f}">A</text>',
        f'<g style="{_tint(made.parts[0])}">{_section(body, scale, sx, cy)}</g>',
        f'<path class="axis" d="M{sx - 10:.2f} {cy:.2f}H{sx + deep * scale + 10:.2f}"/>',
        f'<text class="letter" x="{sx:.2f}" y="{cy - r - 8:.2f}">A-A</text>',
        _dimension_across(sx, sx + body.width * scale, cy + r, cy + r + 22, f"{body.width:g}"),
        _dimension_down(cy - r, cy + r, sx + deep * scale, sx + deep * scale + 26, f"⌀ {round(tall, 3):g}"),
    ]
    if body.bore:
        half = body.bore.diameter / 2 * scale
        bits.append(_dimension_down(cy - half, cy + half, sx, sx - 24, body.bore.callout))
    return "".join(bits) + "</svg>"


def _shape(body: Body, tol: float) -> str:
    face = "".join(path(o, tol) for o in _boundaries(body))
    chamfer = f'<path class="edge" d="{path(body.bore.mouth)}"/>' if body.bore and body.bore.chamfer else ""
    bosses = "".join(f'<path class="boss" d="{path(b.outline, tol)}"/>' for b in body.bosses)
    return f'<path class="face" d="{face}"/>{chamfer}{bosses}'


def _boundaries(body: Body) -> list[Outline]:
    """The boundaries of the section half way up."""
    return [body.outer, *body.holes, *([body.bore.outline] if body.bore else [])]


def _filled(outline: Outline) -> str:
    """Path of an outline with its material filled: that of a hole lies between it and a circle outside."""
    return path(outline) if outline.area > 0 else path(disc(1.1 * outline.r_max)) + path(outline)


def _mark(part: Part) -> str:
    """A dot in the widest stretch of material along a turning part's own x axis: it shows how far it has turned."""
    if not part.motion.rate:
        return ""
    body = part.body
    inner, outer = max(material(_boundaries(body), 0.0), key=lambda s: s[1] - s[0])
    size = min(0.12 * (outer - inner), 0.03 * body.outer.r_max)
    return f'<circle class="mark" cx="{(inner + outer) / 2:.4f}" cy="0" r="{size:.4f}"/>'


def _pitch_circles(machine: Machine, part: Part) -> str:
    return "".join(f'<circle class="pitch" r="{r:g}"/>' for r in pitch_radii(machine, [part]))


def _from_below(machine: Machine, made: Sequence[Made]) -> list[tuple[int, Part, int]]:
    """Place in the machine, part, index of its shape: the lowest first, so that higher parts cover lower ones."""
    shape = {p.name: k for k, m in enumerate(made) for p in m.parts}
    rows = [(k, p, shape[p.name]) for k, p in enumerate(machine.parts)]
    return sorted(rows, key=lambda row: row[1].body.z)


def _pose(part: Part, psi: float) -> str:
    return _turned(part.motion.centre(psi), part.motion.turn(psi))


def _turned(centre: complex, angle: float) -> str:
    return f"translate({centre.real:.6f} {centre.imag:.6f}) rotate({degrees(angle):.5f})"


def _extent(machine: Machine) -> tuple[float, float, float, float]:
    """Left, right, low and high limits [mm] of the room the parts take while they turn."""
    left, right, low, high = [], [], [], []
    for p in machine.parts:
        centre, r = p.motion.centre(0.0), p.body.outer.r_max
        if p.motion.centre_rate:
            centre, r = 0j, r + p.motion.centre_radius
        left.append(centre.real - r)
        right.append(centre.real + r)
        low.append(centre.imag - r)
        high.append(centre.imag + r)
    return min(left), max(right), min(low), max(high)


def _tint(part: Part) -> str:
    return "--tint:rgb({},{},{})".format(*(round(255 * c) for c in part.colour))


def _round_down(x: float) -> float:
    """The largest of 1, 2, 5 times a power of ten not above x."""
    power = 10.0 ** np.floor(np.log10(x))
    return float(max(power * m for m in (1, 2, 5) if power * m <= x * (1 + 1e-9)))


def _section(body: Body, scale: float, x: float, axis: float) -> str:
    """The cut half planes along the part's x axis, upward and downward, before what stands behind them."""
    width, r = body.width * scale, body.outer.r_max * scale
    bits = [f'<rect class="behind" x="{x:.3f}" y="{axis - r:.3f}" width="{width:.3f}" height="{2 * r:.3f}"/>']
    for boss in body.bosses:
        h, b = boss.height * scale, boss.outline.r_max * scale
        bits.append(
            f'<rect class="behind" x="{x + width:.3f}" y="{axis - b:.3f}" width="{h:.3f}" height="{2 * b:.3f}"/>'
        )
    chamfer = body.bore.chamfer * scale if body.bore else 0.0
    if body.bore and chamfer:
        m = body.bore.radius * scale
        edges = "".join(f"M{at:.3f} {axis - m:.3f}v{2 * m:.3f}" for at in (x + chamfer, x + width - chamfer))
        bits.append(f'<path class="edge" d="{edges}"/>')
    ends = [*_boundaries(body)[: 1 + len(body.holes)], *([body.bore.mouth] if body.bore else [])]
    for angle, sign in ((0.0, -scale), (np.pi, scale)):
        for (m0, m1), (e0, _) in zip(material(_boundaries(body), angle), material(ends, angle), strict=True):
            inner = [(0.0, e0), (chamfer, m0), (width - chamfer, m0), (width, e0)]
            bits.append(_cut([*inner, (width, m1), (0.0, m1)], x, axis, sign))
        for boss in body.bosses:
            h = boss.height * scale
            for r0, r1 in material([boss.outline], angle):
                bits.append(_cut([(0.0, r0), (h, r0), (h, r1), (0.0, r1)], x + width, axis, sign))
    return "".join(bits)


def _cut(corners: list[tuple[float, float]], x: float, axis: float, sign: float) -> str:
    """A hatched polygon; corners by distance along the axis, in the sheet's units, and radius [mm]."""
    points = " ".join(f"{x + along:.3f},{axis + sign * r:.3f}" for along, r in corners)
    return f'<polygon class="cut" points="{points}"/><polygon class="hatch" points="{points}"/>'


def _axis_cross(x: float, y: float, r: float) -> str:
    return (
        f'<path class="axis" d="M{x - r - 8:.2f} {y:.2f}H{x + r + 8:.2f}"/>'
        f'<path class="axis" d="M{x:.2f} {y - r - 14:.2f}V{y + r + 14:.2f}"/>'
    )


def _dimension_across(x0: float, x1: float, start: float, y: float, text: str) -> str:
    return (
        f'<path class="extension" d="M{x0:.2f} {start + 3:.2f}V{y + 4:.2f}M{x1:.2f} {start + 3:.2f}V{y + 4:.2f}"/>'
        + _arrow_line((x0, y), (x1, y))
        + f'<text class="dimension" x="{(x0 + x1) / 2:.2f}" y="{y + 14:.2f}" text-anchor="middle">{text}</text>'
    )


def _dimension_down(y0: float, y1: float, start: float, x: float, text: str) -> str:
    side = 1 if x > start else -1
    middle = (y0 + y1) / 2
    return (
        f'<path class="extension" d="M{start + 3 * side:.2f} {y0:.2f}H{x + 4 * side:.2f}'
        f'M{start + 3 * side:.2f} {y1:.2f}H{x + 4 * side:.2f}"/>'
        + _arrow_line((x, y0), (x, y1))
        + f'<text class="dimension" transform="translate({x - 5:.2f} {middle:.2f}) rotate(-90)" '
        f'text-anchor="middle">{text}</text>'
    )


def _arrow_line(a: tuple[float, float], b: tuple[float, float]) -> str:
    """A dimension line with inside arrows, or outside ones where there is no room."""
    length = float(np.hypot(b[0] - a[0], b[1] - a[1]))
    ux, uy = (b[0] - a[0]) / length, (b[1] - a[1]) / length
    if length >= 16:
        return f'<path class="arrows" d="M{a[0]:.2f} {a[1]:.2f}L{b[0]:.2f} {b[1]:.2f}"/>'
    out = 14.0
    return (
        f'<path class="arrow" d="M{a[0] - out * ux:.2f} {a[1] - out * uy:.2f}L{a[0]:.2f} {a[1]:.2f}"/>'
        f'<path class="arrow" d="M{b[0] + out * ux:.2f} {b[1] + out * uy:.2f}L{b[0]:.2f} {b[1]:.2f}"/>'
    )
