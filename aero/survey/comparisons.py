"""What would change the answer: other gas-surface models, other correlations, every switch, at two points.

The most rarefied point shows what surface models, shadows and reflections do to drag; the point of greatest
heat flux shows what correlations, catalysis and the nose radius do to heating.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np
import pandas as pd

from aero.air.state import Air
from aero.arrays import Floats
from aero.body import Vehicle
from aero.body.surface import accommodation
from aero.force.gas_surface_bodies import OTHER_MODELS
from aero.force.loads import flow_direction
from aero.force.reflected_air import reflected_in_air
from aero.gas import Flow, flow
from aero.heat import CONVECTIVE, heating_radius
from aero.survey.chain import conditions
from aero.survey.inputs import Inputs, air_at
from aero.survey.settings import Settings

if TYPE_CHECKING:
    from aero.survey.one_pass import Survey

COMPARISON_COLUMNS = ("topic", "choice", "time_s", "altitude_m", "quantity", "value", "change", "error")
MODELS, CORRELATIONS, SWITCHES = "gas-surface model", "convective correlation", "switch"
DRAG, HEAT = "drag_coefficient", "heat_flux_W_m2"
REFLECTION_TRIANGLES = 20_000  # above it the test particles are left to a call of their own
QUANTITIES = (DRAG, f"{DRAG}_free_molecular", HEAT, "heat_flux_continuum_W_m2")
RAYS = 40_000  # of them, for a drag coefficient to about 0.1 %


def comparisons(survey: Survey) -> pd.DataFrame:
    """Return every comparison as rows.

    Parameters
    ----------
    survey : Survey

    Returns
    -------
    DataFrame
        `COMPARISON_COLUMNS`: `value` in the unit of the quantity's name, `change` as a fraction of what the survey
        has, `error` the statistical 1-sigma of a value, NaN where it has none. Empty for a vehicle without a shape.
    """
    if survey.vehicle.shape is None:
        return pd.DataFrame({name: [] for name in COMPARISON_COLUMNS})
    thin = int(np.nanargmax(survey.points["knudsen.reference"].to_numpy()))
    rows = [*_models(At.row(survey, thin)), *_drag_switches(At.row(survey, thin))]
    flux = survey.points[HEAT].to_numpy()
    if np.isfinite(flux).any():
        hot = At.row(survey, int(np.nanargmax(flux)))
        rows += [*_correlations(hot), *_heat_switches(hot)]
    return pd.DataFrame(rows, columns=list(COMPARISON_COLUMNS))


Row = tuple[str, str, float, float, str, float, float, float]


@dataclasses.dataclass(frozen=True, eq=False)
class At:
    """One sample of a survey, ready to be asked again with something else."""

    survey: Survey
    inputs: Inputs
    air: Air
    moving: Flow
    wall: Floats
    time: float
    values: dict[str, float]

    @classmethod
    def row(cls, survey: Survey, row: int) -> At:
        """Return the sample at a row of the points table."""
        from aero.survey.one_pass import block_inputs

        inputs = block_inputs(survey.trajectory, slice(row, row + 1), survey.trajectory.utc)
        air = air_at(inputs, survey.atmosphere)
        point = survey.points.iloc[row]
        values = {name: float(point[name]) for name in QUANTITIES}
        wall = np.array([float(point["wall_temperature_K"])])
        time = float(point["time_s"])
        return cls(survey, inputs, air, flow(air, inputs.speed), wall, time, values)

    @property
    def angle(self) -> float:
        """Angle of attack here [rad]."""
        given = self.inputs.angle_of_attack
        return self.survey.vehicle.angle_of_attack if given is None else float(given[0])

    @property
    def sideslip(self) -> float:
        """Sideslip here [rad]."""
        given = self.inputs.sideslip
        return self.survey.vehicle.sideslip if given is None else float(given[0])

    @property
    def same_wall(self) -> Settings:
        """The survey's settings with the wall temperature it found here."""
        return dataclasses.replace(self.survey.settings, wall=float(self.wall[0]))

    def again(self, quantity: str, vehicle: Vehicle | None = None, settings: Settings | None = None) -> float:
        """Return a quantity with another vehicle or other settings."""
        columns = conditions(
            self.inputs,
            self.survey.atmosphere,
            vehicle or self.survey.vehicle,
            {"reference": self.survey.vehicle.reference_length},
            settings or self.survey.settings,
            air=self.air,
        )
        return float(columns[quantity][0])

    def line(self, topic: str, choice: str, quantity: str, value: float, error: float = np.nan) -> Row:
        """Return a row; the change is against what the survey has."""
        reference = self.values[quantity]
        change = value / reference - 1.0 if reference else np.nan
        altitude = float(self.inputs.altitude[0])
        return topic, choice, self.time, altitude, quantity, value, change, error


def _models(at: At) -> Iterator[Row]:
    quantity = f"{DRAG}_free_molecular"
    for name, text in OTHER_MODELS.items():
        other = at.survey.vehicle.with_model(name)
        yield at.line(MODELS, text, quantity, at.again(quantity, other, at.same_wall))


def _drag_switches(at: At) -> Iterator[Row]:
    vehicle, settings = at.survey.vehicle, at.survey.settings
    other_gas = dataclasses.replace(settings, real_gas=not settings.real_gas)
    gas = "perfect gas" if settings.real_gas else "equilibrium air"
    yield at.line(SWITCHES, f"{gas} at the stagnation point", DRAG, at.again(DRAG, settings=other_gas))
    if not vehicle.parts and getattr(vehicle.shape, "kind", "") != "mesh":
        return  # a plain convex shape hides nothing from the flow
    changed = vehicle.with_shadows(not vehicle.shadows)
    yield at.line(SWITCHES, f"shadowing {'off' if vehicle.shadows else 'on'}", DRAG, at.again(DRAG, changed))
    yield from _reflections(at)


def _reflections(at: At) -> Iterator[Row]:
    """Every reflection by test particles, against the first ones alone, on the free-molecular drag."""
    vehicle = at.survey.vehicle
    elements = vehicle.elements()
    if elements.vertices is None or len(elements.areas) > REFLECTION_TRIANGLES or vehicle.tumbling:
        return
    towards = flow_direction(at.angle, at.sideslip).reshape(3)
    own = [
        (s.temperature or float(at.wall[0]), float(accommodation(s, at.air)[0]), s.diffuse_fraction)
        for s in elements.surfaces
    ]
    wall, energy, diffuse = (np.array(values)[elements.part] for values in zip(*own, strict=True))
    found = reflected_in_air(
        elements.vertices,
        towards,
        at.air,
        at.moving,
        wall,
        energy_accommodation=energy,
        diffuse_fraction=diffuse,
        rays=RAYS,
    )
    drag, error = (value / vehicle.reference_area for value in found.along(towards))
    quantity = f"{DRAG}_free_molecular"
    yield at.line(SWITCHES, "every reflection, by test particles", quantity, drag, error)


def _correlations(at: At) -> Iterator[Row]:
    quantity = f"{HEAT.removesuffix('_W_m2')}_continuum_W_m2"
    for name in CONVECTIVE:
        settings = dataclasses.replace(at.same_wall, convective=name)
        yield at.line(CORRELATIONS, name, quantity, at.again(quantity, settings=settings))


def _heat_switches(at: At) -> Iterator[Row]:
    vehicle = at.survey.vehicle
    for catalysis in ("full", "partial", "none"):
        if catalysis != vehicle.surface.catalysis:
            other = vehicle.with_catalysis(catalysis)
            yield at.line(SWITCHES, f"wall catalysis: {catalysis}", HEAT, at.again(HEAT, other))
    effective = dataclasses.replace(vehicle, effective_nose_radius=not vehicle.effective_nose_radius)
    here, there = heating_radius(vehicle), heating_radius(effective)
    if here is not None and there is not None and here.radius != there.radius:
        text = f"radius for heating {there.radius:.3g} m instead of {here.radius:.3g} m ({there.source})"
        yield at.line(SWITCHES, text, HEAT, at.again(HEAT, effective))
