"""Reference spots from a general-purpose ray tracer, for tests/optics/against_a_ray_tracer.rs.

Makes tests/optics/reference.csv. Needs optiland (PyPI; 0.6.3 was used), which is no dependency of the project:

    python3 -m venv /tmp/optics && /tmp/optics/bin/pip install optiland==0.6.3
    /tmp/optics/bin/python tests/optics/reference.py > tests/optics/reference.csv

Each mirror is mounted as a builder would mount it, by turning coordinate systems one inside the other: the mount turns
the shaft's direction in the horizontal plane, the spin turns about the shaft, the lean tilts the mirror on its shaft. The
tracer does all the rest: it finds the hits, the normals and the reflections.
"""

import math

from optiland.coordinate_system import CoordinateSystem
from optiland.geometries import Plane
from optiland.interactions.refractive_reflective_model import RefractiveReflectiveModel
from optiland.materials import IdealMaterial
from optiland.rays import RealRays
from optiland.surfaces import Surface

DEG = math.pi / 180
AIR = IdealMaterial(1.0)


def surface(system, mirror):
    model = RefractiveReflectiveModel(parent_surface=None, is_reflective=mirror)
    return Surface(previous_surface=None, material_post=AIR, geometry=Plane(system), interaction_model=model)


def spinning(mount, tilt, angle):
    spin = CoordinateSystem(rz=angle, reference_cs=mount)
    return CoordinateSystem(ry=tilt, reference_cs=spin)


def spot(kind, tilt_a, tilt_b, in_a, in_b, spacing, throw, phase_a, phase_b):
    """Degrees, metres and turns in; the spot on the wall in metres."""
    in_a, in_b, tilt_a, tilt_b = (value * DEG for value in (in_a, in_b, tilt_a, tilt_b))
    turn_a, turn_b = 2 * math.pi * phase_a, 2 * math.pi * phase_b
    # The light leaves b along -z. Seen from b it comes from a, which is at 2*in_b from -z on the side of -x.
    way = (math.sin(2 * in_b), math.cos(2 * in_b))
    mount_a = CoordinateSystem(x=-spacing * way[0], z=-spacing * way[1], ry=2 * in_b - in_a)
    mount_b = CoordinateSystem(ry=math.pi + in_b)
    if kind == "spinning":
        system_a = spinning(mount_a, tilt_a, turn_a)
        # b faces the other way, so that its own x axis points to the left of the wall.
        system_b = spinning(mount_b, tilt_b, math.pi - turn_b)
    else:
        system_a = CoordinateSystem(ry=tilt_a * math.sin(turn_a), reference_cs=mount_a)
        system_b = CoordinateSystem(rx=-tilt_b * math.sin(turn_b), reference_cs=mount_b)
    # Backwards from a: the light comes in along the direction that the untilted a turns into `way`.
    incoming = 2 * (2 * in_b - in_a) - 2 * in_b
    direction = (-math.sin(incoming), -math.cos(incoming))
    x, z = -spacing * way[0] - direction[0], -spacing * way[1] - direction[1]
    ray = RealRays([x], [0.0], [z], [direction[0]], [0.0], [direction[1]], [1.0], [0.52])
    for one in (surface(system_a, True), surface(system_b, True), surface(CoordinateSystem(z=-throw), False)):
        one.trace(ray)
    return float(ray.x[0]), float(ray.y[0])


CASES = [
    # kind, tilts, incidences, spacing, throw
    ("spinning", 0, 0, 10, 10, 0.03, 4),
    ("spinning", 4, 0, 10, 10, 0.03, 4),
    ("spinning", 0, 3, 45, 45, 0.03, 4),
    ("spinning", 4, 4, 10, 10, 0.03, 4),
    ("spinning", 4, 3, 45, 45, 0.03, 4),
    ("spinning", 0.5, 1.5, 22.5, 22.5, 0.1, 10),
    ("spinning", 6, 2, 30, 20, 0.08, 2.5),
    ("spinning", 12, 9, 15, 25, 0.2, 1),
    ("swinging", 4, 3, 0, 0, 0.06, 5),
    ("swinging", 4, 3, 45, 30, 0.06, 5),
]

print("kind,tilt_a_deg,tilt_b_deg,incidence_a_deg,incidence_b_deg,spacing_m,throw_m,phase_a,phase_b,x_m,y_m")
for case in CASES:
    for number in range(12):
        # Phases that fall on no symmetry, after the four quarters.
        phases = (number / 4, number / 4) if number < 4 else ((0.137 * number) % 1, (0.411 * number + 0.05) % 1)
        x, y = spot(*case, *phases)
        numbers = [*case[1:], *(round(phase, 6) for phase in phases)]
        print(",".join([case[0], *(f"{number:g}" for number in numbers), f"{x:.12f}", f"{y:.12f}"]))
