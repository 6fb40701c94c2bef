"""A motor plate with a pinion on the motor and a keyed wheel on a bearing: toothed parts beside ordinary CadQuery.

Run it as a script to write `motor-plate.step` into the folder it is run from, or open it in a CadQuery editor.
"""

from pathlib import Path

import cadquery as cq

from gearsolid import Blank, Bore, InvoluteGear, SpurPair, assembly, roll_test, write_step

pinion_teeth = 17
wheel_teeth = 51
module = 1.0
tooth_thinning = 0.04  # mm a tooth, common practice for hobbed teeth of this module
face_width = 8.0
plate_width = 10.0
air = 1.5  # between plate and teeth

# The pair, and the proof that it rolls, before any metal is drawn.
pinion = InvoluteGear(pinion_teeth, module, tooth_thinning=tooth_thinning)
wheel = InvoluteGear(wheel_teeth, module, tooth_thinning=tooth_thinning)
pair = SpurPair(
    pinion,
    wheel,
    centre_distance=pinion.reference_radius + wheel.reference_radius,
    driver_blank=Blank(face_width + 2.0, Bore(5.0, chamfer=0.3), z=plate_width + air - 1.0),
    driven_blank=Blank(face_width, Bore.keyed(10.0, chamfer=0.4), z=plate_width + air),
    driver_name="pinion",
    driven_name="wheel",
)
rolling = roll_test(pair)

# The plate: pilot and screws of a motor with a 42 mm flange, and the seat of a 10 x 26 x 8 bearing under the wheel.
plate = (
    cq.Workplane("XY")
    .center(pair.centre_distance / 2, 0)
    .rect(pair.centre_distance + 64, 56)
    .extrude(plate_width)
    .edges("|Z")
    .fillet(6.0)
    .faces(">Z")
    .workplane(origin=(0, 0, 0))
    .hole(22.4)
    .faces(">Z")
    .workplane(origin=(0, 0, 0))
    .rect(31, 31, forConstruction=True)
    .vertices()
    .cboreHole(3.4, 6.5, 4.0)
    .faces(">Z")
    .workplane(origin=(pair.centre_distance, 0, 0))
    .cboreHole(14.0, 26.0, 8.0)
)

machine = assembly(pair.parts, name="motor plate").add(plate, name="plate", color=cq.Color(0.75, 0.78, 0.8))

if "show_object" in globals():
    globals()["show_object"](machine)
elif __name__ == "__main__":
    print(rolling.sentence)
    file = write_step(Path("motor-plate.step"), machine)
    print(f"{file.path}: {file.size} bytes, {file.volume:.1f} mm3")
