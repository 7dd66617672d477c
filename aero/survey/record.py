"""The record of a survey: inputs, hashes, versions, options, models, notes; enough to repeat it."""

from __future__ import annotations

import hashlib
import importlib.metadata
import json
import math
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

import aero
from aero.survey.plain import plain_json

if TYPE_CHECKING:
    from aero.survey.one_pass import Survey

PACKAGES = ("numpy", "scipy", "pandas", "pymsis")


def survey_record(survey: Survey) -> dict[str, Any]:
    """Return the record as plain JSON values; file names without folders, no clock."""
    inputs = {
        "trajectory": _file(survey.trajectory.source, survey.trajectory.digest),
        "vehicle": _file(survey.vehicle.source, survey.vehicle.digest),
    }
    chosen = survey.settings
    record: dict[str, Any] = {
        "inputs": inputs,
        "atmosphere": survey.atmosphere.provenance(),
        "options": {
            "bounds": list(chosen.bounds),
            "free_path": chosen.free_path,
            "wall_temperature": chosen.wall,
            "convective": chosen.convective,
            "real_gas": chosen.real_gas,
        },
        "versions": {"aero": aero.__version__, **{p: importlib.metadata.version(p) for p in PACKAGES}},
        "lengths_m": dict(survey.lengths),
        "vehicle": {
            "name": survey.vehicle.name,
            "mass_kg": survey.vehicle.mass,
            "reference_area_m2": survey.vehicle.reference_area,
            "reference_length_m": survey.vehicle.reference_length,
            "nose_radius_m": survey.vehicle.nose_radius,
            "body_class": survey.vehicle.body_class,
            "shape": None if survey.vehicle.shape is None else survey.vehicle.shape.kind,
            "parts": [part.name for part in survey.vehicle.parts],
            "shadowing": survey.vehicle.shadows,
            "tumbling": survey.vehicle.tumbling,
            "surface_model": survey.vehicle.surface.model,
            "catalysis": survey.vehicle.surface.catalysis,
            "moment_point_m": survey.vehicle.moment_point,
        },
    }
    record["summary"] = survey.summary
    record["results"] = results(survey)
    record["segments"] = _rows(survey.segments)
    record["crossings"] = _rows(survey.crossings)
    record["notes"] = list(survey.notes)
    record["skipped"] = [{"line": s.line, "reason": s.reason} for s in survey.trajectory.skipped]
    record["digest"] = digest(record)
    plain: dict[str, Any] = plain_json(record)
    return plain


PEAKS = {
    "heat_flux": "heat_flux_W_m2",
    "drag_deceleration": "drag_deceleration_m_s2",
    "dynamic_pressure": "dynamic_pressure_Pa",
}


def results(survey: Survey) -> dict[str, Any]:
    """Return the headline numbers: peaks at samples, loads over the flight."""
    points = survey.points
    out: dict[str, Any] = {"points": len(points)}
    for name, column in PEAKS.items():
        values = points[column].to_numpy()
        if np.isfinite(values).any():
            at = int(np.nanargmax(values))
            out[f"peak_{column}"] = float(values[at])
            out[f"peak_{name}_altitude_m"] = float(points["altitude_m"].iloc[at])
            out[f"peak_{name}_time_s"] = float(points["time_s"].iloc[at])
    out["heat_load_J_m2"] = float(points["heat_load_J_m2"].iloc[-1])
    mine = survey.segments[survey.segments["length"] == "reference"]
    out["speed_loss_m_s"] = float(mine["speed_loss_m_s"].sum()) if len(mine) else math.nan
    return out


def digest(record: Mapping[str, Any]) -> str:
    """Return a short hash of everything that decides a survey's numbers."""
    deciding = {k: record[k] for k in ("inputs", "atmosphere", "options", "vehicle", "versions")}
    text = json.dumps(plain_json(deciding), sort_keys=True)
    return hashlib.sha256(text.encode()).hexdigest()[:8]


def _rows(table: Any) -> list[dict[str, Any]]:
    return [dict(row) for row in table.to_dict(orient="records")]


def _file(source: str, sha256: str) -> dict[str, str]:
    return {"file": Path(source).name, "sha256": sha256}
