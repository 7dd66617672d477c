"""Mesh files: what is read, and one clear message for each way a mesh can be bad."""

from __future__ import annotations

import math
import pickle
import re
import time

import numpy as np
import pytest
import trimesh

from aero.body import Box, Mesh, Part, Sphere, SphereCone, read_mesh, read_vehicle
from aero.errors import InputError

BOX = Box(length=300.0, width=200.0, height=100.0).panels(6).triangles().vertices  # mm


def export(vertices, path, kind):
    mesh = trimesh.Trimesh(*soup(vertices), process=False)
    found = mesh.export(file_type=kind)
    path.write_bytes(found if isinstance(found, bytes) else found.encode())
    return path


def soup(vertices):
    return vertices.reshape(-1, 3), np.arange(3 * len(vertices)).reshape(-1, 3)


@pytest.mark.parametrize(
    ("kind", "name"),
    [("stl", "b.stl"), ("stl_ascii", "text.STL"), ("obj", "b.obj"), ("ply", "b.ply")],
)
def test_every_kind_of_file_gives_the_same_body(tmp_path, kind, name):
    found = read_mesh(export(BOX, tmp_path / name, kind), "mm")
    mesh = Mesh(found.vertices, found.digest)
    # single precision, and eight digits in text
    assert mesh.extent == pytest.approx((0.3, 0.2, 0.1), rel=1e-6)
    assert mesh.frontal_area == pytest.approx(0.02, rel=1e-6)
    assert mesh.length_across == pytest.approx(0.2, rel=1e-6)
    assert mesh.convex
    assert len(mesh) == 12


def test_binary_stl_that_begins_like_text_is_still_binary(tmp_path):
    path = export(BOX, tmp_path / "b.stl", "stl")
    raw = path.read_bytes()
    path.write_bytes(b"solid of some program".ljust(80) + raw[80:])
    assert len(read_mesh(path, "mm").vertices) == 12


def test_the_same_file_in_another_unit_is_another_body(tmp_path):
    path = export(BOX, tmp_path / "b.stl", "stl")
    small, large = (Mesh(f.vertices, f.digest) for f in (read_mesh(path, "mm"), read_mesh(path, "cm")))
    assert small == Mesh(small.vertices, small.digest)
    assert hash(small) == hash(Mesh(small.vertices, small.digest))
    assert small != large
    assert large.frontal_area == pytest.approx(100 * small.frontal_area)


def test_points_a_rounding_apart_are_one(tmp_path):
    shaken = BOX + np.random.default_rng(2).uniform(-1e-5, 1e-5, BOX.shape)  # 3e-8 of the longest side
    assert len(read_mesh(export(shaken, tmp_path / "b.stl", "stl"), "mm").vertices) == 12


def flipped_some(vertices):
    turned = vertices.copy()
    turned[3] = turned[3][::-1]
    return turned


def with_sliver(vertices):
    flat = vertices[:1].copy()
    flat[0, 2] = 0.5 * (flat[0, 0] + flat[0, 1])
    return np.concatenate([vertices, flat])


def with_cavity(vertices):
    return np.concatenate([vertices, 0.5 * vertices[:, ::-1]])


def with_gap(vertices):
    broken = vertices.copy()
    broken[0, 0, 0] = np.nan
    return broken


@pytest.mark.parametrize("kind", ["stl", "stl_ascii", "obj", "ply"])
@pytest.mark.parametrize(
    ("spoil", "unit", "message"),
    [
        (lambda v: v[1:], "mm", r"is not watertight: 3 open edges, expected a closed surface; close its"),
        (lambda v: v[:, ::-1], "mm", r"is inside out: its normals point inwards \(volume -0.006 m3\); flip"),
        (
            flipped_some,
            "mm",
            r"is partly inside out: neighbouring triangles turn opposite ways along 3 edges",
        ),
        (with_cavity, "mm", r"has 1 of 2 separate pieces whose normals point inwards; flip them, or remove"),
        (with_sliver, "mm", r"has 1 of 13 triangles without an area \(first: triangle 13\); remove degen"),
        (lambda v: v * 1e-6, "mm", r"is 3e-07 m long in unit 'mm', expected 1 mm to 1 km; state the unit"),
        (lambda v: v, "km", r"is 3e\+05 m long in unit 'km', expected 1 mm to 1 km"),
        (lambda v: v, "furlong", r"unit 'furlong' is not a unit of length; use one of: m, km"),
    ],
)
def test_one_clear_message_for_each_bad_mesh(tmp_path, kind, spoil, unit, message):
    path = export(spoil(BOX), tmp_path / f"bad.{kind.split('_')[0]}", kind)
    with pytest.raises(InputError, match=rf"^bad\.\w+: {message}") as caught:
        read_mesh(path, unit, source=path.name)
    assert str(pickle.loads(pickle.dumps(caught.value))) == str(caught.value)


def test_corners_that_are_not_finite(tmp_path):
    path = export(with_gap(BOX), tmp_path / "bad.stl", "stl")
    with pytest.raises(InputError, match=r"1 of 12 triangles with a corner that is not finite \(first: tri"):
        read_mesh(path, "mm")


@pytest.mark.parametrize(
    ("name", "raw", "message"),
    [
        ("none.stl", None, r"cannot be read: No such file or directory; give a mesh file, relative to the"),
        ("body.step", b"ISO-10303-21;", r"ends in '.step', expected one of: .stl, .obj, .ply"),
        ("body.slt", b"x", r"ends in '.slt', expected one of: .*; did you mean 'stl'"),
        ("body", b"x", r"ends in '', expected one of"),
        ("body.stl", b"", r"is empty, expected a mesh"),
        ("body.stl", b"\0" * 84, r"holds no triangles, expected a closed body"),
        ("body.stl", b"solid x\nendsolid x\n", r"holds no triangles|is not a mesh that can be read as STL"),
        ("body.stl", b"solid x\nfacet normal 0 0\n", r"holds no triangles|is not a mesh that can be read"),
        ("body.stl", b"\x89PNG\r\n" * 100, r"is not a mesh that can be read as STL"),
        ("body.stl", b"mass,drag\n1,2\n", r"is not a mesh that can be read as STL"),
        ("body.obj", b"this is a letter\n", r"holds no triangles|is not a mesh that can be read as OBJ"),
        ("body.ply", b"this is a letter\n", r"is not a mesh that can be read as PLY; export the body again"),
        ("body.stl", b"\0" * 80 + b"\x03\0\0\0" + b"\0" * 100, r"is 184 bytes long, but .* 3 tri.* is 234; "),
    ],
)
def test_files_that_are_no_mesh(tmp_path, name, raw, message):
    if raw is not None:
        (tmp_path / name).write_bytes(raw)
    with pytest.raises(InputError, match=rf"^{name}: ({message})"):
        read_mesh(tmp_path / name, "mm", source=name)


MANY = 10_000_000


def many_binary(path):
    with path.open("wb") as file:  # sparse: it takes no room on the disk
        file.write(b"\0" * 80 + MANY.to_bytes(4, "little"))
        file.truncate(84 + 50 * MANY)


def many_in_header(path):
    path.write_bytes(
        b"ply\nformat ascii 1.0\nelement vertex 9\nproperty float x\n"
        b"element face 10000000\nproperty list uchar int vertex_index\nend_header\n"
    )


def many_by_size(path):
    with path.open("wb") as file:
        file.write(b"solid large\n")
        file.truncate(2_500_000_000)


def many_by_lines(path):
    path.write_bytes(b"v 0 0 0\n" * 3 + b"f 1 2 3\n" * 1_000_001)


@pytest.mark.parametrize(
    ("write", "name", "message"),
    [
        (
            many_binary,
            "m.stl",
            r"has 10,000,000 triangles, expected at most 1,000,000; export it with at most",
        ),
        (many_in_header, "m.ply", r"has 10,000,000 triangles, expected at most 1,000,000"),
        (many_by_size, "m.stl", r"is 2,500 MB long, more than a million triangles take; export it"),
        (many_by_lines, "m.obj", r"has 1,000,001 triangles, expected at most 1,000,000"),
    ],
)
def test_too_many_triangles_are_refused_before_they_are_read(tmp_path, write, name, message):
    write(tmp_path / name)
    began = time.perf_counter()
    with pytest.raises(InputError, match=message):
        read_mesh(tmp_path / name, "mm")
    assert time.perf_counter() - began < 1.0  # reading 500 MB alone takes longer


FILE = """\
mass = "38 kg"
[reference]
area = "0.02 m2"
length = "0.3 m"
[shape]
kind = "mesh"
file = "body.stl"
unit = "mm"
"""


@pytest.fixture
def write(tmp_path):
    export(BOX, tmp_path / "body.stl", "stl")

    def written(text):
        (tmp_path / "box.toml").write_text(text, encoding="utf-8")
        return tmp_path / "box.toml"

    return written


def test_a_vehicle_of_a_mesh(write, tmp_path):
    vehicle = read_vehicle(write(FILE))
    assert isinstance(vehicle.shape, Mesh)
    assert vehicle.nose_radius is None
    assert vehicle.body_class == "box"
    assert any("states no body_class" in note for note in vehicle.notes)
    stated = read_vehicle(write(FILE + 'body_class = "blunt-cone"\nnose_radius = "5 cm"\n'))
    assert (stated.body_class, stated.nose_radius) == ("blunt-cone", 0.05)
    assert not any("body_class" in note for note in stated.notes)
    # the mesh counts in the digest: the same vehicle file with another body is another vehicle
    export(BOX * 1.5, tmp_path / "body.stl", "stl")
    assert read_vehicle(write(FILE)).digest != vehicle.digest


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('unit = "mm"\n', "", r'line 5: \[shape\] key \'unit\' is missing; add unit = "mm"'),
        ('file = "body.stl"\n', "", r"\[shape\] key 'file' is missing; add file"),
        ('unit = "mm"', 'unit = "furlong"', r"line 8: key 'shape.unit' is 'furlong', expected one of: m, km"),
        (
            'unit = "mm"',
            'unit = "m"',
            r"line 8: key 'shape.unit' is 'm', which makes the mesh 300 m long, more than 10 times off the "
            r"reference length of 0.3 m; is unit 'mm' meant\?$",
        ),
        (
            'unit = "mm"',
            'unit = "mm"\nlength = "1 m"',
            r"unknown key 'shape.length', expected one of: kind, fi",
        ),
        ('unit = "mm"', 'unit = "mm"\nbody_class = "capsule"', r"'capsule', expected one of: sphere, cyl"),
        ('unit = "mm"', 'unit = "mm"\nnose_radius = "0 m"', r"'shape.nose_radius' is '0 m', expected more"),
        ("body.stl", "other.stl", r"^other.stl: cannot be read: No such file"),
    ],
)
def test_mistakes_in_the_table_of_a_mesh(write, old, new, message):
    with pytest.raises(InputError, match=message):
        read_vehicle(write(FILE.replace(old, new, 1)))


def test_a_mesh_from_python_is_checked_too():
    with pytest.raises(ValueError, match=r"vertices have the shape \(0, 3, 3\)"):
        Mesh(np.zeros((0, 3, 3)), "none")
    with pytest.raises(ValueError, match="nose_radius is -1"):
        Mesh(BOX, "box", nose_radius=-1.0)
    with pytest.raises(ValueError, match="body_class is 'capsule', expected one of: sphere"):
        Mesh(BOX, "box", stated_class="capsule")


def test_convex_bodies_are_known_as_such():
    ball = Sphere(diameter=1.0)
    assert Mesh.of(ball.panels(800)).convex
    assert Mesh.of(SphereCone(nose_radius=0.2, half_angle=0.5, base_radius=0.4).panels(800)).convex
    two = np.concatenate([BOX, BOX + np.array([400.0, 0.0, 0.0])])
    assert not Mesh(two, "two").convex
    dented = ball.panels(800).triangles().vertices.copy()
    dented[dented[..., 0] > 0.45] *= 0.5
    assert not Mesh(dented, "dented").convex


def test_elements_behind_others_get_no_flow():
    # a box of 0.2 by 0.1 m behind a larger plate-like box: only the front one's area meets the flow
    front = BOX * [0.1, 2.0, 2.0] + [400.0, 0.0, 0.0]
    pair = Mesh(np.concatenate([BOX, front]) * 1e-3, "pair")
    assert pair.frontal_area == pytest.approx(0.08, rel=1e-2)  # outline to a pixel of 1/512
    open_pair = Mesh(pair.vertices, "pair", shadows=False)
    seen = open_pair.facets(0.0)
    assert np.sum(np.maximum(seen.cosines, 0.0) * seen.areas) == pytest.approx(0.1, rel=1e-12)


def test_line_of_a_part_is_its_own(write):
    text = FILE + "".join(f'[[part]]\nname = "p{i}"\n[part.shape]\nkind = "sphere"\n' for i in range(2))
    text = text.replace('kind = "sphere"\n', 'kind = "sphere"\ndiameter = "1 m"\n', 1)
    with pytest.raises(InputError, match=re.escape("line 16: [part[2].shape] key 'diameter' is missing")):
        read_vehicle(write(text))


def test_panels_of_a_part_that_is_a_mesh_are_its_triangles():
    part = Part("wing", Mesh(BOX, "box"), angle=math.pi / 2)
    assert part.panels(7).areas.size == 12
