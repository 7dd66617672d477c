"""Parts: where they lie, how they turn, what the vehicle of them is."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from aero.body import SHAPES, Assembly, Box, Cylinder, FlatPlate, Part, Sphere, Surface, Vehicle, read_vehicle
from aero.errors import InputError
from aero.force import continuum, free_molecular
from aero.gas import flow, mixed_air

EXAMPLES = Path(__file__).parents[2] / "trajectories"
ORBIT = [0.20, 0.01, 0.70, 0.02, 0.001, 0.06, 0.009]
AIR = mixed_air(900.0, 1e15, ORBIT, altitude=300e3)
STREAM = flow(AIR, 7500.0)
BOX, PLATE = Box(length=0.3, width=0.2, height=0.1), FlatPlate(length=0.4, width=0.2)


def drag_area(shape, angle=0.0):
    vehicle = Vehicle("body", 1.0, 1.0, 1.0, shape=shape)
    free = free_molecular(vehicle, AIR, STREAM, 300.0, 0.9, angle)
    dense = continuum(vehicle, AIR, STREAM, 1e-6, angle)
    return np.array([free.drag, dense.drag])


def test_a_part_turns_about_its_hinge_right_handed():
    # trailing edge-on behind the origin; a quarter turn about y through the hinge points it down (z)
    part = Part("wing", PLATE, position=(-0.5, 0.0, 0.1), hinge=(-0.3, 0.0, 0.1), angle=math.pi / 2)
    assert part.placed(np.array([0.0, 0.05, 0.0])) == pytest.approx([-0.3, 0.05, 0.3])
    panels = part.panels(2)
    assert panels.centroids == pytest.approx(np.array([[-0.3, 0.0, 0.3]] * 2))
    assert panels.normals[0] == pytest.approx([1.0, 0.0, 0.0])
    assert part.turned(0.0).panels(2).centroids[0] == pytest.approx([-0.5, 0.0, 0.1])
    # without a hinge it turns about its own origin
    assert Part("wing", PLATE, position=(1.0, 2.0, 3.0), angle=0.4).panels(2).centroids[0] == pytest.approx(
        [1.0, 2.0, 3.0]
    )


@given(
    axis=st.tuples(*[st.floats(-1.0, 1.0)] * 3).filter(lambda v: np.linalg.norm(v) > 0.1),
    hinge=st.tuples(*[st.floats(-2.0, 2.0)] * 3),
    angle=st.floats(-7.0, 7.0),
)
@settings(max_examples=40, deadline=None)
def test_turning_keeps_size_and_the_hinge_itself(axis, hinge, angle):
    part = Part("body", BOX, position=(0.2, -0.1, 0.4), axis=axis, hinge=hinge, angle=angle)
    still, turned = part.turned(0.0).panels(24), part.panels(24)
    assert turned.areas == pytest.approx(still.areas)
    assert (turned.normals**2).sum(axis=1) == pytest.approx(np.ones(len(turned.areas)))
    middle, point = floats(hinge), floats(axis)
    distance = [np.linalg.norm(p.centroids - middle, axis=1) for p in (still, turned)]
    assert distance[0] == pytest.approx(distance[1])
    along = [(p.centroids - middle) @ point for p in (still, turned)]
    assert along[0] == pytest.approx(along[1], abs=1e-12)


def floats(values):
    return np.array(values, dtype=float)


def test_elements_are_all_parts_in_triangles_with_their_surfaces():
    hot = Surface(temperature=400.0)
    parts = (Part("body", BOX), Part("wing", PLATE, hot, position=(-1.0, 0.0, 0.0)))
    vehicle = Vehicle("both", 1.0, 0.02, 0.2, shape=Assembly(parts), parts=parts)
    found = vehicle.elements(6)
    assert found.names == ("body", "wing")
    assert found.surfaces == (Surface(), hot)
    assert np.bincount(found.part, weights=found.areas) == pytest.approx([0.22, 0.16])
    assert found.vertices.mean(axis=1) == pytest.approx(found.centroids)
    edge = found.vertices[:, 1] - found.vertices[:, 0], found.vertices[:, 2] - found.vertices[:, 0]
    assert 0.5 * np.cross(*edge) == pytest.approx(found.normals * found.areas[:, None])
    with pytest.raises(ValueError, match="read-only"):
        found.areas[0] = 1.0


@pytest.mark.parametrize("kind", [kind for kind in SHAPES if kind != "mesh"])
def test_elements_of_every_plain_shape_are_its_panels(kind):
    sizes = {"half_angle": 0.5, "nose_radius": 0.1, "base_radius": 0.3, "diameter": 0.5}
    from aero.body import dimensions

    shape = SHAPES[kind](**{name: sizes.get(name, 0.4) for name in dimensions(SHAPES[kind])})
    vehicle, panels = Vehicle.from_shape(shape), shape.panels(200)
    found = vehicle.elements(200)
    assert found.areas.sum() == pytest.approx(panels.areas.sum(), rel=1e-12)
    total = (found.normals * found.areas[:, None]).sum(axis=0)
    assert total == pytest.approx((panels.normals * panels.areas[:, None]).sum(axis=0), abs=1e-12)
    assert np.all(found.part == 0)
    assert found.surfaces == (vehicle.surface,)


def test_no_shape_no_elements():
    with pytest.raises(ValueError, match="bare has no shape, so no elements"):
        Vehicle("bare", 1.0, 1.0, 1.0).elements()


def test_one_part_alone_is_the_shape_itself():
    for angle in (0.0, 0.4):
        assert drag_area(Assembly((Part("body", BOX),)), angle) == pytest.approx(
            drag_area(BOX, angle), rel=1e-6
        )
    # 8000 panels: a twentieth of a per cent of a sphere's area
    ball = Sphere(diameter=0.5)
    assert drag_area(Assembly((Part("body", ball),))) == pytest.approx(drag_area(ball), rel=1.5e-3)


def test_parts_side_by_side_add_up_and_parts_in_line_do_not():
    ball = Part("ball", Sphere(diameter=0.1))
    beside = Assembly((Part("body", BOX), Part("ball", ball.shape, position=(0.0, 0.5, 0.0))))
    free, dense = drag_area(beside) - drag_area(BOX) - drag_area(ball.shape)
    assert abs(free) < 2e-3 * drag_area(ball.shape)[0]
    assert abs(dense) < 2e-3 * drag_area(ball.shape)[1]
    behind = Assembly((Part("body", BOX), Part("ball", ball.shape, position=(-0.5, 0.0, 0.0))))
    added = drag_area(behind) - drag_area(BOX)
    # all of the ball's face lies in shadow; its lee keeps the little that thermal motion brings
    assert added[0] < 0.02 * drag_area(ball.shape)[0]
    free_standing = Assembly(behind.parts, shadows=False)
    assert drag_area(free_standing) == pytest.approx(drag_area(BOX) + drag_area(ball.shape), rel=2e-3)


def test_a_panel_that_turns_meets_the_flow_with_the_sine():
    wing = Part("wing", PLATE, position=(0.0, 0.0, 2.0))
    for angle in (0.0, 0.3, math.pi / 2, 2.0):
        shape = Assembly((Part("body", BOX), wing.turned(angle)))
        assert shape.frontal_area == pytest.approx(0.02 + 0.08 * abs(math.sin(angle)), rel=1e-3, abs=1e-12)
        # and turning the panel is turning the flow about it
        own = drag_area(PLATE, angle)
        assert drag_area(shape)[0] - drag_area(BOX)[0] == pytest.approx(own[0], rel=2e-3)


def test_body_class_of_an_assembly_is_that_of_what_rules_it():
    small = Part("mast", Cylinder(diameter=0.01, length=0.2))
    assert Assembly((Part("body", Sphere(diameter=1.0)), small)).body_class == "sphere"
    assert Assembly((Part("body", Sphere(diameter=0.2)), Part("wing", PLATE))).body_class == "box"
    assert Assembly((Part("body", Sphere(diameter=0.2)), small)).nose_radius == pytest.approx(0.1)


def test_the_example_with_a_panel():
    vehicle = read_vehicle(EXAMPLES / "sedge-panel.toml")
    plain = read_vehicle(EXAMPLES / "sedge.toml")
    assert [part.name for part in vehicle.parts] == ["body", "panel"]
    assert vehicle.parts[0].shape == plain.shape
    assert vehicle.parts[1].surface == Surface(340.0, 0.8, 0.92, 1.0)
    assert vehicle.moment_point == (-0.03, 0.0, 0.0)
    assert vehicle.moment_length == 0.34
    # the panel from 0 to 0.15 m below the axis, the box hides its upper 0.05 m over 0.226 m
    assert vehicle.shape.frontal_area == pytest.approx(0.0226 + 0.4 * 0.15 - 0.226 * 0.05, rel=0.01)
    folded = vehicle.with_turned("panel", 0.0)
    assert folded.shape.frontal_area == pytest.approx(0.0226, rel=1e-3)
    whole = vehicle.with_surface(diffuse_fraction=0.5)
    assert (
        {part.surface.diffuse_fraction for part in whole.parts} == {whole.surface.diffuse_fraction} == {0.5}
    )
    assert whole.parts[1].surface.temperature == 340.0
    with pytest.raises(ValueError, match="no part 'wing'; parts: body, panel"):
        vehicle.with_turned("wing", 0.0)


GOOD = """\
mass = "8 kg"
shadowing = true
[reference]
area = "0.02 m2"
length = "0.2 m"
[surface]
model = "cll"
normal_energy_accommodation = 0.9
tangential_momentum_accommodation = 0.95
catalysis = "partial"
recombination = 0.1
[attitude]
angle_of_attack = "5 deg"
sideslip = "-3 deg"
bank = "40 deg"
[moment]
point = ["-3 cm", "0 m", "1 mm"]
length = "0.34 m"
[heating]
effective_nose_radius = "0.3 m"
[[part]]
name = "core"
[part.shape]
kind = "box"
length = "0.3 m"
width = "0.2 m"
height = "0.1 m"
[[part]]
name = "wing"
position = ["-0.4 m", "0 m", "0 m"]
turn = {axis = [0, 1, 0], angle = "-90 deg"}
[part.shape]
kind = "flat-plate"
length = "0.3 m"
width = "0.2 m"
[part.surface]
temperature = "radiative"
catalysis = "none"
"""


@pytest.fixture
def read(tmp_path):
    def reading(text):
        path = tmp_path / "sat.toml"
        path.write_text(text, encoding="utf-8")
        return read_vehicle(path)

    return reading


def test_everything_the_new_tables_may_say(read):
    vehicle = read(GOOD)
    surface = vehicle.surface
    assert (surface.model, surface.catalysis, surface.recombination) == ("cll", "partial", 0.1)
    assert (surface.normal_energy_accommodation, surface.tangential_momentum_accommodation) == (0.9, 0.95)
    angles = (vehicle.angle_of_attack, vehicle.sideslip, vehicle.bank)
    assert np.degrees(angles) == pytest.approx([5.0, -3.0, 40.0])
    assert vehicle.moment_point == pytest.approx((-0.03, 0.0, 0.001))
    assert vehicle.moment_length == 0.34
    assert vehicle.effective_nose_radius == 0.3
    core, wing = vehicle.parts
    assert core.surface == surface  # what a part does not give is the vehicle's
    assert (wing.surface.temperature, wing.surface.model, wing.surface.recombination) == (None, "cll", 0.0)
    assert wing.position == (-0.4, 0.0, 0.0)
    assert wing.hinge is None
    assert wing.angle == pytest.approx(-math.pi / 2)
    assert isinstance(vehicle.shape, Assembly)
    assert vehicle.shape.shadows
    assert vehicle.shape.frontal_area == pytest.approx(0.06, rel=1e-3)  # the wing's, and the core in it


def test_what_a_file_leaves_out(read):
    vehicle = read('mass = "8 kg"\n[reference]\narea = "0.02 m2"\nlength = "0.2 m"\n')
    assert vehicle.parts == ()
    assert vehicle.shape is None
    assert (vehicle.moment_point, vehicle.moment_length) == (None, None)
    assert (vehicle.sideslip, vehicle.bank, vehicle.tumbling) == (0.0, 0.0, False)
    assert vehicle.effective_nose_radius is False
    assert vehicle.surface == Surface()
    assert read(GOOD.replace("shadowing = true", "shadowing = false")).shape.shadows is False


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("shadowing = true", "shadowing = 1", r"line 2: key 'shadowing' is '1', expected true or false"),
        ("shadowing", "shadow", r"line 2: unknown key 'shadow', .*did you mean 'shadowing'"),
        ('"cll"', '"cl"', r"key 'surface.model' is 'cl', expected one of: maxwell, cll; did you mean 'cll'"),
        (
            "= 0.9\n",
            "= 1.9\n",
            r"'surface.normal_energy_accommodation' is 1.9, expected a number from 0 to 1",
        ),
        ("recombination = 0.1\n", "", r"'surface.catalysis' is 'partial' without a recombination; add"),
        (
            '"partial"',
            '"full"',
            r"'surface.recombination' stands beside catalysis 'full', which fixes it at 1",
        ),
        ('"-3 deg"', '"-93 deg"', r"'attitude.sideslip' is more than a quarter of a turn, expected -90 deg"),
        ("bank =", "tumbling = true\nbank =", r"'attitude.angle_of_attack' stands beside tumbling = true"),
        (
            "bank =",
            "roll =",
            r"unknown key 'attitude.roll', expected one of: angle_of_attack, sideslip, bank",
        ),
        ('"1 mm"', "0.001", r"line 17: key 'moment.point' holds '0.001', which has no unit"),
        (', "1 mm"', "", r"'moment.point' is '.*', expected three values \(x, y, z\); write point = \["),
        ('point = ["-3 cm", "0 m", "1 mm"]\n', "", r"line 16: \[moment\] key 'point' is missing"),
        ('"0.3 m"\n[[part]]', '"0.3 m"\nnose_radius = "1 m"\n[[part]]', r"stands beside nose_radius"),
        ('name = "core"\n', "", r"line 21: \[part\[1\]\] key 'name' is missing; add name = \"panel\""),
        ('"wing"', '"core"', r"line 29: key 'part\[2\].name' is 'core', which is taken; choose another"),
        ('[[part]]\nname = "core"', '[part]\nname = "core"', r"TOML"),
        ("[0, 1, 0]", "[0, 0, 0]", r"key 'part\[2\].turn.axis' is \[0, 0, 0\], expected a direction"),
        ("[0, 1, 0]", '["0 m", 1, 0]', r"key 'part\[2\].turn.axis' holds '0 m', expected a number"),
        ('angle = "-90 deg"', "angle = 90", r"key 'part\[2\].turn.angle' holds '90', which has no unit"),
        (', angle = "-90 deg"', "", r"\[part\[2\].turn\] key 'angle' is missing; add angle = \"30 deg\""),
        ("turn =", "turns =", r"line 31: unknown table 'part\[2\].turns', .* did you mean 'turn'"),
        (
            '"none"',
            '"non"',
            r"line 38: key 'part\[2\].surface.catalysis' is 'non', expected one of: full, par",
        ),
        ("[part.surface]", "[part.surfaces]", r"line 36: unknown table 'part\[2\].surfaces'.*'surface'"),
        ('height = "0.1 m"\n', "", r"line 23: \[part\[1\].shape\] key 'height' is missing"),
    ],
)
def test_one_clear_message_for_each_mistake(read, old, new, message):
    assert old in GOOD
    with pytest.raises(InputError, match=message):
        read(GOOD.replace(old, new, 1))


def test_a_shape_beside_parts_is_the_part_called_body(read):
    text = GOOD.replace("[[part]]", '[shape]\nkind = "sphere"\ndiameter = "0.1 m"\n[[part]]', 1)
    vehicle = read(text)
    assert [part.name for part in vehicle.parts] == ["body", "core", "wing"]
    with pytest.raises(InputError, match=r"key 'part\[1\].name' is 'body', which is taken"):
        read(text.replace('"core"', '"body"'))
    with pytest.raises(InputError, match=r"line 21: \[part\[1\]\] key 'shape' is missing; is 'shapes'"):
        read(GOOD.replace("[part.shape]\nkind", "[part.shapes]\nkind", 1))


def test_surfaces_from_python_are_checked():
    with pytest.raises(ValueError, match="model is 'cl', expected one of: maxwell, cll"):
        Surface(model="cl")
    with pytest.raises(ValueError, match=r"recombination is 0.5 with catalysis 'full', expected 1"):
        Surface(recombination=0.5)
    with pytest.raises(ValueError, match=r"tangential_momentum_accommodation is 2.1, expected 0 to 2"):
        Surface(tangential_momentum_accommodation=2.1)
    with pytest.raises(ValueError, match="an assembly needs at least one part"):
        Assembly(())
    with pytest.raises(ValueError, match=r"axis is \[0.0, 0.0, 0.0\], expected three numbers"):
        Part("wing", PLATE, axis=(0.0, 0.0, 0.0))
    with pytest.raises(ValueError, match="part 'wing' holds a number that is not finite"):
        Part("wing", PLATE, position=(math.nan, 0.0, 0.0))
