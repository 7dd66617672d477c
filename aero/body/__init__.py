"""Vehicles: the file, the shape, the surface."""

from aero.body.continuum_table import ContinuumTable
from aero.body.facets import Facets, Panels
from aero.body.shapes import (
    BODY_CLASSES,
    SHAPES,
    Box,
    Cone,
    Cylinder,
    FlatPlate,
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
from aero.body.vehicle import Vehicle, read_vehicle

__all__ = [
    "BODY_CLASSES",
    "OXYGEN_COVERAGE",
    "SHAPES",
    "Box",
    "Cone",
    "ContinuumTable",
    "Cylinder",
    "Facets",
    "FlatPlate",
    "Panels",
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
    "read_vehicle",
]
