"""How the sides and the crown of a tooth make one pitch, whatever curves they are."""

from gearsolid.curves.curve import Mirrored
from gearsolid.curves.outline import Piece
from gearsolid.teeth.root import Foot, Root

# A land or a root flat narrower than this share of the tooth's size is none.
NONE = 1e-9

# A tooth this near to its point, as a share of its module or height, is drawn pointed.
POINTED = 1e-6


def mirrored(side: tuple[Piece, ...]) -> tuple[Piece, ...]:
    """The other side of a tooth, in travel order."""
    return tuple(Piece(Mirrored(p.curve), p.role) for p in reversed(side))


def pitch_pieces(foot: Foot, crown: tuple[Piece, ...], root: Root) -> tuple[Piece, ...]:
    """One pitch from the foot of a tooth on the +x axis to the foot of the next.

    Args:
        foot: near side from the root to where the crown begins.
        crown: from there over the tip to the mirrored place.
        root: what lies between two teeth.
    """
    side = foot.pieces
    land = root.land(side[0].curve.start)
    flat = (Piece(land, "root"),) if abs(land.end - land.start) > NONE * abs(side[0].curve.start) else ()
    return (*side, *crown, *mirrored(side), *flat)
