"""`report.html`: one file that opens offline, with the machine turning, every contact plotted and every part drawn."""

import json
from collections.abc import Iterable, Sequence
from html import escape
from importlib.resources import files
from math import degrees
from string import Template

import numpy as np

from gearsolid.contact.result import Contact, RollResult, Verdict
from gearsolid.output.made import Made
from gearsolid.output.plot import line_plot
from gearsolid.output.report import FileRecord, FindingRecord, PartRecord, Report, tightest_first
from gearsolid.output.views import close_view, machine_view, part_view, shapes, windows
from gearsolid.output.wording import VERDICTS, angle_text, finding, number, ratio_text
from gearsolid.pairs.machine import Machine

# Pieces named one by one up to this number.
_MOST_NAMES = 4


def page(report: Report, machine: Machine, result: RollResult, made: Sequence[Made]) -> str:
    """The report as a self-contained HTML page.

    Args:
        report: what `report.json` says.
        machine: the machine, for its pictures.
        result: its roll test, for the plots.
        made: its distinct parts, in the order of the report's.

    Returns:
        HTML text that refers to nothing outside itself, except the files beside it.
    """
    worst = result.worst
    (engagement,) = [e for e in machine.engagements if (e.name_a, e.name_b) == (worst.name_a, worst.name_b)]
    pitch_window, gap_window = windows(engagement, worst)
    return Template(_resource("page.html")).substitute(
        name=escape(report.name),
        title=escape(report.title),
        version=escape(report.version),
        verdict=report.verdict.value,
        verdict_word=VERDICTS[report.verdict],
        sentence=escape(finding(worst)),
        findings=_findings(report.findings),
        figures=_figures(report, machine),
        shapes=shapes(made),
        machine_view=machine_view(machine, made, worst),
        ring_sentence=_ring_sentence(worst),
        close_pitch=close_view(engagement, worst, pitch_window),
        close_gap=close_view(engagement, worst, gap_window),
        close_caption=f"{escape(_pair(worst))} at input angle {angle_text(worst.input_angle)}",
        contact_rows="\n".join(_contact_row(c) for c in tightest_first(result)),
        plots="\n".join(_plots(*group) for group in _alike(tightest_first(result))),
        parts="\n".join(_part(m, r, k) for k, (m, r) in enumerate(zip(made, report.parts, strict=True))),
        recipe="\n".join(_recipe(report.recipe)),
        files="\n".join(_file(f) for f in report.files),
        css=_resource("page.css"),
        script=_resource("page.js"),
        motions=_motions(machine, worst),
    )


def _resource(name: str) -> str:
    return files("gearsolid.output").joinpath(name).read_text(encoding="utf-8")


def _ring_sentence(contact: Contact) -> str:
    what = "overlap deepest" if contact.verdict is Verdict.BINDS else "come closest"
    return f"The ring marks where {escape(contact.name_a)} and {escape(contact.name_b)} {what}."


def _findings(found: Sequence[FindingRecord]) -> str:
    """Named causes as a list; nothing where there are none."""
    if not found:
        return ""
    items = "\n".join(
        f'<li class="{"binds" if f.binds else "reported"}"><b>{f.cause.value}</b>, {escape(_alike_pairs(f))}: '
        f"{escape(f.sentence)}.<br>To do: {escape(f.remedy)}.</li>"
        for f in found
    )
    return (
        '<section aria-labelledby="h-findings">\n<h2 id="h-findings">Findings</h2>\n'
        f'<ul class="findings">\n{items}\n</ul>\n</section>'
    )


def _alike_pairs(found: FindingRecord) -> str:
    first = " with ".join(found.pairs[0])
    return first if len(found.pairs) == 1 else f"{first} and {len(found.pairs) - 1} pairs alike"


def _figures(report: Report, machine: Machine) -> str:
    plays = [c.play for c in report.contacts if c.play is not None]
    ratios = [c.contact_ratio for c in report.contacts if c.contact_ratio is not None]
    rows = [
        ("Ratio, input to output", ratio_text(report.ratio), ""),
        ("Working centre distance", f"{report.centre_distance:.4f}", "mm"),
        ("Least clearance", f"{report.contacts[0].clearance:.4f}", "mm"),
        ("Proven at every angle", f"{min(c.proven for c in report.contacts):.4f}", "mm"),
    ]
    if plays:
        rows.append(("Least play at a pitch circle", f"{min(plays):.4f}", "mm"))
    if ratios:
        rows.append(("Least contact ratio", f"{min(ratios):.3f}", ""))
    rows.append(("Parts", f"{len(machine.parts)}", f"of {len(report.parts)} shapes"))
    return "\n".join(f"<div><dt>{a}</dt><dd>{b} <span>{c}</span></dd></div>" for a, b, c in rows)


def _contact_row(c: Contact) -> str:
    return (
        f"<tr><td>{escape(_pair(c))}</td>"
        f'<td class="v-{c.verdict.value}">{c.verdict.value}</td>'
        f'<td class="n">{c.clearance:.4f}</td><td class="n">{number(c.play, 4)}</td>'
        f'<td class="n">{number(c.play_angle, 4)}</td><td class="n">{number(c.contact_ratio, 3)}</td>'
        f'<td class="n">{number(c.transmission_error, 5)}</td>'
        f"<td>{angle_text(c.input_angle)}, {c.roles[0]} on {c.roles[1]}</td></tr>"
    )


def _alike(contacts: Iterable[Contact]) -> list[list[Contact]]:
    """Contacts whose curves are the same but for the input angle they start at, as of equal planets."""
    groups: dict[object, list[Contact]] = {}
    for c in contacts:
        curves = [c.clearances] if c.plays is None else [c.clearances, c.plays]
        key = (number(c.play, 6), number(c.contact_ratio, 4), *(np.round(y, 6).tobytes() for y in curves))
        groups.setdefault(key, []).append(c)
    return list(groups.values())


def _pair(c: Contact) -> str:
    return f"{c.name_a} with {c.name_b}"


def _plots(c: Contact, *others: Contact) -> str:
    plots = line_plot(c.angles, c.clearances, "Clearance", "mm", kind="clearance")
    if c.plays is not None:
        plots += line_plot(c.angles, c.plays, "Play", "degrees", kind="play")
    alike = f"<p>The same: {escape(', '.join(map(_pair, others)))}</p>" if others else ""
    return f'<div><h3>{escape(_pair(c))}</h3>{alike}<div class="pair">{plots}</div></div>'


def _facts(rows: Iterable[tuple[str, str]]) -> str:
    return '<dl class="facts">' + "".join(f"<div><dt>{a}</dt><dd>{b}</dd></div>" for a, b in rows) + "</dl>"


def _part(made: Made, record: PartRecord, index: int) -> str:
    count = len(record.placed_as)
    rows = [
        ("Pieces", f"{count}" if count == 1 else f"{count}: {escape(_places(record.placed_as))}"),
        ("Face width", f"{record.width:g} mm"),
        ("Largest diameter about the axis", f"{record.diameter:.4f} mm"),
        ("Volume of the solid", f"{record.volume:.3f} mm³"),
        ("Volume by area and width", f"{record.exact_volume:.3f} mm³"),
        ("Flanks deviate at most", f"{record.flank_deviation:.2e} mm"),
        ("Read back from STEP", "one valid solid" if record.valid else "not a valid solid"),
        ("Read back from STL", f"{record.triangles} triangles, watertight"),
        ("Volume of the triangles", f"{record.facet_volume:.3f} mm³"),
        (
            "Read back from DXF",
            f"cut lines within {record.curve_deviation:.1e} mm, as arcs {record.arc_deviation:.1e} mm",
        ),
        ("Files", "<br>".join(f'<a href="{escape(f)}">{escape(f)}</a>' for f in record.files)),
    ]
    return (
        f"<article>{part_view(made, index)}<div><h3>{escape(made.name[0].upper() + made.name[1:])}</h3>"
        f"{_facts(rows)}</div></article>"
    )


def _places(names: Sequence[str]) -> str:
    return ", ".join(names) if len(names) <= _MOST_NAMES else f"{names[0]} to {names[-1]}"


def _recipe(tables: dict[str, dict[str, str]]) -> list[str]:
    return [
        f"<div><h3>{escape(table)}</h3>{_facts((escape(k), escape(v)) for k, v in rows.items())}</div>"
        for table, rows in tables.items()
    ]


def _file(record: FileRecord) -> str:
    name = escape(record.name)
    link = f'<a href="{name}">{name}</a>'
    return f'<tr><td>{link}</td><td>{escape(record.content)}</td><td class="n">{_size(record.size)}</td></tr>'


def _size(size: int) -> str:
    return f"{size} B" if size < 1000 else f"{size / 1000:.1f} kB" if size < 1e6 else f"{size / 1e6:.2f} MB"


def _motions(machine: Machine, worst: Contact) -> str:
    parts = [
        {
            "centre_radius": p.motion.centre_radius,
            "centre_angle": degrees(p.motion.centre_angle),
            "centre_rate": p.motion.centre_rate,
            "angle": degrees(p.motion.angle),
            "rate": p.motion.rate,
        }
        for p in machine.parts
    ]
    data = {"parts": parts, "ratio": machine.ratio, "tightest": worst.input_angle}
    return json.dumps(data).replace("<", "\\u003c")
