"""Vehicles: the file, the shape, the surface."""

from aero.body.assembly import Assembly
from aero.body.continuum_table import ContinuumTable
from aero.body.elements import Elements
from aero.body.facets import Facets, Panels
from aero.body.part import Part
from aero.body.read_mesh import read_mesh
from aero.body.shapes import (
    BODY_CLASSES,
    SHAPES,
    Box,
    Cone,
    Cylinder,
    FlatPlate,
    Mesh,
    Shape,
    Sphere,
    SphereCone,
    build_shape,
    dimensions,
)
from aero.body.surface import (
    OXYGEN_COVERAGE,
    Surface,
    accommodation,
    accommodation_uncertainty,
    oxygen_coverage,
)
from aero.body.vehicle import Vehicle
from aero.body.vehicle_file import read_vehicle

__all__ = [
    "BODY_CLASSES",
    "OXYGEN_COVERAGE",
    "SHAPES",
    "Assembly",
    "Box",
    "Cone",
    "ContinuumTable",
    "Cylinder",
    "Elements",
    "Facets",
    "FlatPlate",
    "Mesh",
    "Panels",
    "Part",
    "Shape",
    "Sphere",
    "SphereCone",
    "Surface",
    "Vehicle",
    "accommodation",
    "accommodation_uncertainty",
    "build_shape",
    "dimensions",
    "oxygen_coverage",
    "read_mesh",
    "read_vehicle",
]
