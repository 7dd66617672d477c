"""The vehicle file: what it may say, and one clear message for each way to get it wrong."""

from __future__ import annotations

import math
import pickle

import numpy as np
import pytest

from aero.body import SHAPES, Sphere, SphereCone, Vehicle, build_shape, dimensions, read_vehicle
from aero.errors import InputError

GOOD = """\
name = "Ball & Co"
mass = "38 kg"

[reference]
area = "0.636 m2"
length = "90 cm"

[lengths]
nose = "0.27 m"
seal_gap = "1.5 mm"
step_mm = 3

[shape]
kind = "sphere-cone"
nose_radius = "0.27 m"
half_angle = "55 deg"
base_radius = "0.45 m"

[surface]
temperature = "radiative"
emissivity = 0.8
energy_accommodation = "oxygen-coverage"
diffuse_fraction = 0.9

[attitude]
angle_of_attack = "-5 deg"

[heating]
nose_radius = "0.4 m"

[bridging.drag]
function = "erf-log"
centre = 0.2

[bridging.heating]
exponent = 2.5

[continuum]
mach = [2, 10.0]
drag = [1.4, 1.6]
"""


@pytest.fixture
def write(tmp_path):
    def written(text: str, name: str = "capsule.toml") -> str:
        path = tmp_path / name
        path.write_text(text, encoding="utf-8")
        return str(path)

    return written


def test_everything_a_file_may_say(write):
    vehicle = read_vehicle(write(GOOD))
    assert vehicle.name == "Ball & Co"
    assert (vehicle.mass, vehicle.reference_area, vehicle.reference_length) == (38.0, 0.636, 0.9)
    assert vehicle.lengths == pytest.approx({"nose": 0.27, "seal_gap": 1.5e-3, "step": 3e-3})
    assert vehicle.shape == SphereCone(nose_radius=0.27, half_angle=math.radians(55.0), base_radius=0.45)
    assert vehicle.surface.temperature is None
    assert vehicle.surface.energy_accommodation == "oxygen-coverage"
    assert vehicle.surface.diffuse_fraction == 0.9
    assert vehicle.angle_of_attack == pytest.approx(math.radians(-5.0))
    assert vehicle.nose_radius == 0.4
    assert vehicle.states_nose_radius
    assert vehicle.bridging == {"drag": {"function": "erf-log", "centre": 0.2}, "heating": {"exponent": 2.5}}
    assert vehicle.continuum is not None
    assert vehicle.continuum.drag_at(6.0, 0.0) == pytest.approx(1.5)
    assert vehicle.source == "capsule.toml"
    assert len(vehicle.digest) == 64
    assert vehicle.body_class == "blunt-cone"


def test_the_least_a_file_must_say(write):
    vehicle = read_vehicle(write('mass_kg = 5\n[reference]\narea_m2 = 0.04\nlength = "200 mm"\n'))
    assert (vehicle.mass, vehicle.reference_area, vehicle.reference_length) == (5.0, 0.04, 0.2)
    assert (vehicle.shape, vehicle.nose_radius, vehicle.body_class) == (None, None, None)
    assert vehicle.surface.temperature == 300.0
    assert any("no shape" in note for note in vehicle.notes)


def test_a_reference_area_that_is_not_the_shapes_earns_a_note(write):
    text = GOOD.replace("0.636 m2", "0.159 m2")
    assert any("0.25 times" in note for note in read_vehicle(write(text)).notes)
    assert read_vehicle(write(GOOD)).notes == ()


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('mass = "38 kg"', "mass = 38", r"line 2: key 'mass' holds '38', which has no unit, expected a mass"),
        (
            'mass = "38 kg"',
            'mass = "38 m"',
            r"key 'mass' holds '38 m': 'm' is not a unit of mass; use one of: kg",
        ),
        ('mass = "38 kg"', 'mass = "heavy"', r"key 'mass' holds 'heavy', expected a number"),
        ('mass = "38 kg"', 'mass = "-38 kg"', r"line 2: key 'mass' is '-38 kg', expected more than 0"),
        ('mass = "38 kg"', "", r"key 'mass' is missing; add mass = \"38 kg\""),
        ('mass = "38 kg"', 'masss = "38 kg"', r"key 'mass' is missing; is 'masss' meant for it"),
        (
            'mass = "38 kg"',
            'mass = "38 kg"\nmass_kg = 38',
            r"line 3: key 'mass_kg' gives the mass 'mass' a second",
        ),
        ('mass = "38 kg"', 'mass = ["38 kg"]', r"key 'mass' holds '\['38 kg'\]', expected a mass"),
        ('mass = "38 kg"', "mass = 38 kg", r"is not valid TOML: .*line 2.*; values with a unit are text"),
        ('area = "0.636 m2"\n', "", r"line 4: \[reference\] key 'area' is missing"),
        ("[reference]", "[refrence]", r"key 'reference' is missing; is 'refrence' meant for it"),
        (
            "[surface]",
            "[surfaces]",
            r"line 19: unknown table 'surfaces', expected one of: .*did you mean 'surface'",
        ),
        (
            "emissivity = 0.8",
            "emissivty = 0.8",
            r"line 21: unknown key 'surface.emissivty'.*did you mean 'emissivity'",
        ),
        (
            "emissivity = 0.8",
            "emissivity = 0",
            r"key 'surface.emissivity' is 0, expected a number above 0 up to 1",
        ),
        ("emissivity = 0.8", 'emissivity = "high"', r"'surface.emissivity' is 'high', expected a number"),
        ("diffuse_fraction = 0.9", "diffuse_fraction = 1.2", r"is 1.2, expected a number from 0 to 1"),
        (
            '"oxygen-coverage"',
            '"oxygen-cover"',
            r"'oxygen-cover', expected a number from 0 to 1 or 'oxygen-coverage'; did you mean",
        ),
        ('"radiative"', "300", r"'surface.temperature' holds '300', which has no unit.*or write 'radiative'"),
        ('"radiative"', '"-10 K"', r"'surface.temperature' is '-10 K', expected more than 0"),
        (
            'kind = "sphere-cone"',
            'kind = "spherecone"',
            r"'shape.kind' is 'spherecone', expected one of: sphere, .*did you",
        ),
        ('kind = "sphere-cone"', "", r"\[shape\] key 'kind' is missing"),
        ('kind = "sphere-cone"', 'kind = "cone"', r"unknown key 'shape.nose_radius'"),
        (
            'nose_radius = "0.27 m"',
            'nose_radius = "0.9 m"',
            r"a nose radius of 0.9 m does not fit a base radius of 0.45 m",
        ),
        (
            'half_angle = "55 deg"',
            'half_angle = "95 deg"',
            r"half_angle is 95 deg, expected less than 90 deg",
        ),
        (
            'half_angle = "55 deg"',
            "half_angle = 55",
            r"'shape.half_angle' holds '55', which has no unit, expected an angle",
        ),
        ('base_radius = "0.45 m"', "", r"\[shape\] key 'base_radius' is missing; add base_radius"),
        (
            'seal_gap = "1.5 mm"',
            'reference = "1 m"',
            r"key 'lengths.reference' is taken by \[reference\] length",
        ),
        ("step_mm = 3", "step = 3", r"line 11: key 'lengths.step' holds '3', which has no unit"),
        ('"-5 deg"', '"200 deg"', r"'attitude.angle_of_attack' is more than half a turn"),
        ("centre = 0.2", "center = 0.2", r"unknown key 'bridging.drag.center'.*did you mean 'centre'"),
        ("centre = 0.2", "centre = -1", r"'bridging.drag.centre' is -1, expected a number above 0"),
        ("[bridging.drag]", "[bridging.drak]", r"unknown table 'bridging.drak'.*did you mean 'drag'"),
        (
            "mach = [2, 10.0]",
            "mach = [10, 2]",
            r"line 39: key 'continuum.mach' cannot be used: mach must rise",
        ),
        ("mach = [2, 10.0]", 'mach = [2, "x"]', r"'continuum.mach' holds 'x', expected a number"),
        ("mach = [2, 10.0]", "altitude = [2, 10.0]", r"'continuum.altitude' has no unit"),
        ("drag = [1.4, 1.6]", "drag = [1.4]", r"drag has 1 values, mach has 2"),
        ("drag = [1.4, 1.6]", "drag = [1.4, -1.6]", r"drag holds a negative value"),
        ("mach = [2, 10.0]\n", 'file = "none.csv"\n', r"'continuum.drag' stands beside 'file'"),
    ],
)
def test_one_clear_message_for_each_mistake(write, old, new, message):
    assert old in GOOD
    with pytest.raises(InputError, match=message) as caught:
        read_vehicle(write(GOOD.replace(old, new, 1)))
    assert "capsule.toml" in str(caught.value)
    assert str(pickle.loads(pickle.dumps(caught.value))) == str(caught.value)


def test_a_file_that_is_not_there_or_not_text(tmp_path):
    with pytest.raises(InputError, match="cannot be read: No such file"):
        read_vehicle(tmp_path / "none.toml")
    (tmp_path / "bytes.toml").write_bytes(b"\xff\xfe\x00")
    with pytest.raises(InputError, match="is not UTF-8 text"):
        read_vehicle(tmp_path / "bytes.toml")


FILED = 'mass = "1 kg"\n[reference]\narea = "1 m2"\nlength = "1 m"\n[continuum]\nfile = "c.csv"\n'


def test_coefficients_from_a_file_count_in_the_digest(write):
    path = write(FILED)
    write("# made by hand\nAltitude [km],Drag coefficient,lift\n40,1.2,0.1\n60,1.4,0.3\n", "c.csv")
    first = read_vehicle(path)
    assert first.continuum is not None
    assert first.continuum.drag_at(5.0, 50e3) == pytest.approx(1.3)
    assert first.continuum.lift_at(5.0, 50e3) == pytest.approx(0.2)
    write("altitude [km],drag\n40,1.2\n60,1.5\n", "c.csv")
    assert read_vehicle(path).digest != first.digest


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (None, "c.csv: cannot be read"),
        ("", "c.csv: is empty"),
        ("mach,drag\n1,2\n3\n", r"c.csv, line 3: has 1 fields, the header has 2"),
        ("mach,drag\n1,n/a\n", r"c.csv, line 2: column 'drag' holds 'n/a', expected a number"),
        ("altitude,drag\n1,2\n", r"line 1: column 'altitude' has no unit"),
        ("mach,cd\n1,2\n", r"column 'cd' is unknown"),
        ("mach,drag,mach\n1,2,3\n", r"column 'mach' has a meaning that another"),
        ("mach\n1\n", r"needs a column drag"),
        ("mach,drag\n1,2\n", r"has 1 value\(s\), expected at least 2"),
        ("mach,drag\n1,2\n2,nan\n", r"drag holds a value that is not finite"),
    ],
)
def test_mistakes_in_a_coefficient_file(write, text, message):
    path = write(FILED)
    if text is not None:
        write(text, "c.csv")
    with pytest.raises(InputError, match=message):
        read_vehicle(path)


def test_a_shape_is_a_vehicle():
    vehicle = Vehicle.from_shape(Sphere(diameter=2.0))
    assert vehicle.reference_area == pytest.approx(math.pi)
    assert vehicle.reference_length == vehicle.length_across == 2.0
    assert math.isnan(vehicle.mass)
    changed = vehicle.with_surface(energy_accommodation=0.5)
    assert (changed.surface.energy_accommodation, vehicle.surface.energy_accommodation) == (0.5, 1.0)


@pytest.mark.parametrize("kind", [kind for kind, shape in SHAPES.items() if dimensions(shape)])
def test_every_shape_is_read_by_its_own_dimensions(write, kind):
    sizes = {
        name: '"30 deg"' if what == "angle" else '"0.5 m"' for name, what in dimensions(SHAPES[kind]).items()
    }
    lines = "".join(f"{name} = {value}\n" for name, value in sizes.items())
    text = f'mass = "1 kg"\n[reference]\narea = "1 m2"\nlength = "1 m"\n[shape]\nkind = "{kind}"\n{lines}'
    vehicle = read_vehicle(write(text))
    assert vehicle.shape is not None
    assert vehicle.shape.kind == kind
    missing = text.replace(f"{next(iter(sizes))} =", "# =")
    with pytest.raises(InputError, match=f"key '{next(iter(sizes))}' is missing"):
        read_vehicle(write(missing))


def test_shapes_from_options_name_the_option():
    flags = {"diameter": "--diameter"}
    with pytest.raises(InputError, match=r"--shape: a sphere needs --diameter"):
        build_shape("sphere", {}, source="--shape", flags=flags)
    with pytest.raises(InputError, match=r"a box has no --diameter"):
        build_shape("box", {"diameter": 1.0}, source="--shape", flags=flags)
    with pytest.raises(InputError, match=r"did you mean 'sphere'"):
        build_shape("spere", {"diameter": 1.0}, source="--shape")
    with pytest.raises(InputError, match=r"diameter is -1, expected a positive number"):
        build_shape("sphere", {"diameter": -1.0}, source="--shape")
    with pytest.raises(InputError, match=r"--diameter: '1' has no unit, expected a length"):
        build_shape("sphere", {"diameter": "1"}, source="--shape", flags=flags)
    assert build_shape("sphere", {"diameter": "1 m"}).frontal_area == pytest.approx(np.pi / 4)


def test_every_override_the_file_takes_is_one_the_bridges_take(write):
    from aero.bridge import bridge_for

    text = GOOD.split("[bridging.drag]")[0]
    text += '[bridging.drag]\nfunction = "erf-log"\nvariable = "knudsen"\ncentre = 0.2\nwidth = 2.0\n'
    text += "centre_sigma = 0.2\nwidth_sigma = 0.3\ncontinuum_sigma = 0.02\ncontinuum_above = 0\n"
    vehicle = read_vehicle(write(text + "[bridging.heating]\nexponent = 3\nsigma = 0.1\n"))
    assert bridge_for(vehicle, "drag").centre == 0.2
    assert bridge_for(vehicle, "heating").exponent == 3.0
