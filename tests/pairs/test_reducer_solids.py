"""Every kind of part of these machines as a solid of the CAD kernel: valid, with the volume it was designed with."""

import pytest

from gearsolid.pairs.lobe_rotors import LobeRotors
from gearsolid.shop.bore import Bore
from gearsolid.teeth.lobes import LobeRotor
from tests.pairs.test_reducer import INSIDE_OUT, PLAIN, TWO_TEETH
from tests.pairs.test_rotor_machines import rotor_set

MACHINES = {
    "plain reducer": PLAIN,
    "two-tooth reducer": TWO_TEETH,
    "inside-out reducer": INSIDE_OUT,
    "rotor set": rotor_set(clearance=0.05),
    "lobe rotors": LobeRotors(LobeRotor(3, 40.0, 0.05), 60.0, Bore.keyed(20.0)),
}


def kinds(machine):
    """One part of each kind: the pins, discs and rotors with higher numbers are alike."""
    return [p for p in machine.parts if not p.name[-1].isdigit() or p.name.endswith(" 1")]


@pytest.mark.cad
@pytest.mark.parametrize(
    "part", [pytest.param(p, id=f"{p.name} of a {name}") for name, m in MACHINES.items() for p in kinds(m)]
)
def test_part_is_a_valid_solid_of_its_volume(part):
    from gearsolid.solids.body import body_solid

    assert body_solid(part.body).isValid()
