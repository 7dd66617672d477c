"""What the docs promise to list is listed: columns, units, keys, options, tests, links."""

from __future__ import annotations

import dataclasses
import re
from pathlib import Path

import click
import pytest

import aero
from aero.air import ATMOSPHERES
from aero.body import SHAPES, dimensions
from aero.body.surface import CATALYSIS, SURFACE_MODELS, Surface
from aero.body.vehicle import BRIDGED
from aero.bridge import BRIDGES, DEFAULTS, SIMILARITY, Bridge
from aero.cli import COMMANDS, group
from aero.force.gas_surface import GAS_SURFACE
from aero.force.gas_surface_bodies import OTHER_MODELS
from aero.gas import FREE_PATHS
from aero.heat import CONVECTIVE
from aero.heat.fay_riddell import TRANSPORT
from aero.regime import METHODS, REGIMES
from aero.survey.columns import CROSSING_COLUMNS, SEGMENT_COLUMNS, point_columns
from aero.survey.comparisons import COMPARISON_COLUMNS, CORRELATIONS, MODELS, SWITCHES
from aero.survey.grid import AXES
from aero.survey.grid import COLUMNS as GRID_COLUMNS
from aero.survey.interpolate import SCALES
from aero.trajectory.meanings import MEANINGS
from aero.trajectory.metadata import KEYS
from aero.units import UNITS

ROOT = Path(__file__).parents[2]
DOCS = ROOT / "docs"
FORMATS = (DOCS / "formats.md").read_text(encoding="utf-8")
METHOD = (DOCS / "method.md").read_text(encoding="utf-8")
NOMENCLATURE = (DOCS / "nomenclature.md").read_text(encoding="utf-8")
PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted(DOCS.rglob("*.md"))]


def section(title: str) -> str:
    """Return a part of docs/formats.md, from its heading to the next one of any level."""
    return re.split(r"^#{2,3} ", FORMATS.split(f"{title}\n", 1)[1], maxsplit=1, flags=re.MULTILINE)[0]


def test_every_points_column_has_a_row() -> None:
    table = section("### Points columns")
    missing = [
        column.name for column in point_columns(["NAME"], attitude=True) if f"`{column.name}`" not in table
    ]
    assert not missing


@pytest.mark.parametrize(
    ("title", "columns"),
    [
        ("### Segments columns", SEGMENT_COLUMNS),
        ("### Crossings columns", CROSSING_COLUMNS),
        ("### Comparisons columns", COMPARISON_COLUMNS),
        ("## Aerodynamic databases", (*(axis.column for axis in AXES), *GRID_COLUMNS)),
    ],
)
def test_every_column_of_the_other_tables_has_a_row(title: str, columns: tuple[str, ...]) -> None:
    table = section(title)
    assert not [name for name in columns if f"`{name}`" not in table]


def test_every_topic_of_the_comparisons_is_named() -> None:
    table = section("### Comparisons columns")
    assert not [topic for topic in (MODELS, CORRELATIONS, SWITCHES) if f"`{topic}`" not in table]


def test_every_unit_is_listed() -> None:
    table = section("## Units")
    rows = dict(re.findall(r"^\| ([a-z ]+) \| ([^|]+) \|$", table, re.MULTILINE))
    typed = set(UNITS) - {"energy per mass", "heat flux"}  # not asked of anybody yet
    assert {name: set(rows[name].split(", ")) for name in typed} == {name: set(UNITS[name]) for name in typed}


def test_every_key_of_the_files_is_listed() -> None:
    for meaning in MEANINGS.values():
        assert f"`{meaning.column}`" in section("## Trajectory files")
    assert not [key for key in KEYS if f"`{key}`" not in section("## Trajectory files")]
    vehicle = section("## Vehicle files")
    for kind, shape in SHAPES.items():
        row = next(line for line in vehicle.splitlines() if line.startswith(f"| `{kind}`"))
        assert not [name for name in dimensions(shape) if f"`{name}`" not in row]
    for texts, numbers in BRIDGED.values():
        assert not [key for key in (*texts, *numbers) if f"`{key}`" not in vehicle]


def test_every_key_of_bodies_and_surfaces_is_listed() -> None:
    vehicle = section("## Vehicle files")
    fields = {field.name for field in dataclasses.fields(Surface)}
    angles = {"angle_of_attack", "sideslip", "bank", "tumbling"}
    for table, keys in (("surface", fields), ("attitude", angles), ("moment", {"point", "length"})):
        assert not [key for key in keys if f"`[{table}] {key}`" not in vehicle]
    turned = ("[[part]] name", "[[part]] position", "[part.shape]", "[part.surface]")
    turns = [f"[part.turn] {key}" for key in ("axis", "hinge", "angle")]
    heating = ("[heating] nose_radius", "[heating] effective_nose_radius", "shadowing")
    assert not [key for key in (*turned, *turns, *heating) if f"`{key}`" not in vehicle]
    assert not [name for name in (*SURFACE_MODELS, *CATALYSIS) if f"`{name}`" not in vehicle]


def test_every_entry_of_a_registry_is_in_the_method() -> None:
    bodies = (GAS_SURFACE, OTHER_MODELS, CATALYSIS, TRANSPORT, SCALES)
    for registry in (ATMOSPHERES, FREE_PATHS, CONVECTIVE, BRIDGES, SIMILARITY, *bodies):
        assert not [name for name in registry if f"`{name}`" not in METHOD]
    assert not [name for name in (*REGIMES, *METHODS) if name not in METHOD]


def test_the_method_prints_the_defaults_of_every_bridge() -> None:
    table = METHOD.split("### 8.2", 1)[1].split("### 8.3", 1)[0]
    for (body, coefficient), row in DEFAULTS.items():
        if coefficient != "drag":
            continue
        assert isinstance(row, Bridge)
        line = next(
            s for s in table.splitlines() if s.startswith("|") and body.replace("no-shape", "no shape") in s
        )
        cells = [cell.strip() for cell in line.split("|")]
        assert [float(cell.rstrip(" %")) for cell in cells[2:7]] == pytest.approx(
            [
                row.centre,
                row.width,
                row.centre_sigma,
                100 * row.width_sigma / row.width,
                100 * row.continuum_sigma,
            ]
        )


def test_every_public_name_and_setting_is_in_the_nomenclature() -> None:
    told = NOMENCLATURE + (DOCS / "guides" / "python.md").read_text(encoding="utf-8")
    names = [name for name in aero.__all__ if not name.startswith("_")]
    assert not [name for name in names if name not in told]
    fields = {field.name for field in dataclasses.fields(aero.Settings)}
    assert fields == {"bounds", "free_path", "wall", "convective", "real_gas"}  # told as words there


def test_every_command_has_its_guide_and_every_option_is_told() -> None:
    context = click.Context(group)
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    told = (
        readme
        + FORMATS
        + METHOD
        + "".join(p.read_text(encoding="utf-8") for p in (DOCS / "guides").iterdir())
    )
    for name in COMMANDS:
        assert (DOCS / "guides" / f"{name}.md").is_file()
        assert f"aero {name}" in readme
        command = group.get_command(context, name)
        assert command is not None
        options = [o for p in command.params if isinstance(p, click.Option) for o in p.opts]
        assert not [option for option in options if option not in told]


def test_every_test_the_validation_names_exists() -> None:
    page = (DOCS / "validation.md").read_text(encoding="utf-8")
    tests = ROOT / "tests"
    files = {p.relative_to(tests).as_posix(): p.read_text(encoding="utf-8") for p in tests.rglob("test_*.py")}
    named = set(re.findall(r"\b([a-z_]+/test_[a-z0-9_]+\.py)", page))
    assert named <= files.keys()
    functions = set(re.findall(r"\b(test_[a-z0-9_]+)\b(?!\.py)", page))
    defined = set(re.findall(r"^def (test_[a-z0-9_]+)\(", "\n".join(files.values()), re.MULTILINE))
    assert functions
    assert sorted(functions - defined) == []


@pytest.mark.parametrize("page", PAGES, ids=lambda p: p.relative_to(ROOT).as_posix())
def test_links_lead_somewhere(page: Path) -> None:
    targets = re.findall(r"\]\(([^)#]+)\)", page.read_text(encoding="utf-8"))
    local = [target for target in targets if "://" not in target]
    assert not [target for target in local if not (page.parent / target).exists()]
