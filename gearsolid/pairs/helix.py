"""Helical members in a machine: how fast their section turns along the axis, and which of them roll together.

Every transverse section of a helical pair rolls like the one at height 0, so a flat test of that one speaks for all, as
long as the sections of both turn in step on their way up. That is what is checked here.
"""

from collections.abc import Mapping
from itertools import pairwise
from math import atan, degrees, radians, tan, tau

from gearsolid.errors import DesignError
from gearsolid.pairs.blank import Blank, body_of, is_ring
from gearsolid.pairs.part import Body
from gearsolid.teeth.involute_member import InvoluteMember
from gearsolid.teeth.member import Member

# Pitches passed per height may differ by this share.
_IN_STEP = 1e-9
# Middles of double helical members may differ by this much [mm].
_SAME_HEIGHT = 1e-6


def twist_rate(member: Member) -> float:
    """Turn of a member's transverse section per height [rad/mm], positive right-hand; 0 for straight teeth.

    Only involute members carry a helix angle.
    """
    if not isinstance(member, InvoluteMember):
        return 0.0
    return tan(radians(member.helix_angle_deg)) / member.reference_radius


def member_body(member: Member, blank: Blank) -> Body:
    """The body of a member, its teeth helical where the member's are.

    Raises:
        DesignError: as `body_of`.
    """
    return body_of(member.outline, blank, twist_rate(member))


def check_helices(members: Mapping[str, tuple[Member, Blank]]) -> None:
    """Refuse members, each working with the next, whose sections do not turn in step along the axis.

    Args:
        members: name -> member and its blank, in the order in which they work together.

    Raises:
        DesignError: says both helix angles, and what the second must be.
    """
    for (name_a, (a, blank_a)), (name_b, (b, blank_b)) in pairwise(members.items()):
        sense = 1 if is_ring(a.outline) or is_ring(b.outline) else -1
        passed_a, passed_b = twist_rate(a) * a.teeth, sense * twist_rate(b) * b.teeth
        if abs(passed_a - passed_b) > _IN_STEP * max(abs(passed_a), abs(passed_b)):
            raise DesignError(
                f"{name_a} has a helix angle of {_angle(a):.6g} deg and {name_b} one of {_angle(b):.6g} deg, so that "
                f"over 10 mm of width their sections turn by {_pitches(passed_a):.5g} and {_pitches(passed_b):.5g} "
                "pitches; on parallel axes, members of one module have equal angles, "
                f"{'of the same hand when one is a ring' if sense > 0 else 'of opposite hand'}: give {name_b} "
                f"{sense * _angle(a):.6g} deg"
            )
        if passed_a:
            _check_courses(name_a, blank_a, name_b, blank_b)


def _check_courses(name_a: str, a: Blank, name_b: str, b: Blank) -> None:
    if a.course != b.course:
        raise DesignError(f"{name_a} is {_kind(a)} and {name_b} {_kind(b)}; members that work together are alike")
    middle_a, middle_b = (blank.z + blank.face_width / 2 for blank in (a, b))
    if len(a.course) > 1 and abs(middle_a - middle_b) > _SAME_HEIGHT:
        raise DesignError(
            f"the teeth of {name_a} turn back at a height of {middle_a:g} mm and those of {name_b} at {middle_b:g} mm; "
            "double helical members that work together have their middles at one height: give them one face width, or "
            "set one of them higher"
        )


def _angle(member: Member) -> float:
    """Helix angle at the reference circle [deg]."""
    return degrees(atan(twist_rate(member) * member.reference_radius))


def _pitches(passed: float) -> float:
    """Pitches over 10 mm of width, from the turn per height times the tooth count [rad/mm]."""
    return passed * 10 / tau


def _kind(blank: Blank) -> str:
    return "double helical" if len(blank.course) > 1 else "helical"
