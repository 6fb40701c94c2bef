"""Which way to turn a member so that its space meets the tooth of its mate."""

from math import pi


def tooth_offset(teeth: int, angle: float, direction: float) -> float:
    """How far a tooth stands ahead of a direction, in pitches from -1/2 to 1/2.

    Args:
        teeth: tooth count [-].
        angle: turn of the member [rad]; at zero a tooth is centred on the +x axis.
        direction: direction looked at from the member's axis [rad].
    """
    pitches = (angle - direction) * teeth / (2 * pi)
    return pitches - round(pitches)


def mate_angle(teeth: int, direction: float, offset: float) -> float:
    """Turn of a member [rad] that puts a tooth space `offset` pitches ahead of a direction.

    Args:
        teeth: tooth count [-].
        direction: direction looked at from the member's axis [rad].
        offset: in pitches [-].
    """
    return direction + (offset + 0.5) * 2 * pi / teeth
