"""An aerodynamic database: coefficients over a grid, read and interpolated without computing them again."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from aero.arrays import ArrayLike, Floats, floats
from aero.errors import InputError
from aero.survey.grid import AXES, COLUMNS, Grid, Progress, interpolation_errors, shares
from aero.survey.interpolate import SCALES, multilinear, scale_of
from aero.survey.settings import Settings

if TYPE_CHECKING:
    from aero.air.state import Atmosphere
    from aero.body import Vehicle


@dataclass(frozen=True, eq=False)
class Database:
    """Coefficients over a grid of altitude, speed, angle of attack and sideslip.

    Attributes
    ----------
    axes : tuple of (n_i,) arrays
        Altitude [m], speed [m/s], angle of attack and sideslip [rad], ascending.
    columns : dict of str to (n_1, n_2, n_3, n_4) array
        Keyed by column name, in the unit of its suffix.
    record : dict
        Vehicle, atmosphere, settings, versions, interpolation, notes, as plain JSON values; empty where the file
        had none.
    source : str
        File name without folder; empty for one just computed.

    Notes
    -----
    `build_database` computes one, `Database.read` reads one.
    """

    axes: tuple[Floats, ...]
    columns: dict[str, Floats]
    record: dict[str, Any] = field(default_factory=dict)
    source: str = ""

    @cached_property
    def scales(self) -> dict[str, str]:
        """Key of `SCALES` that each column is interpolated in."""
        return {name: scale_of(name, values) for name, values in self.columns.items()}

    @cached_property
    def _stacks(self) -> dict[tuple[str, ...], Floats]:
        return {}

    def _stack(self, names: tuple[str, ...]) -> Floats:
        """Return columns in their scales as one array (k, ...), made once for each choice of columns."""
        if names not in self._stacks:
            speeds = self.axes[1].reshape(1, -1, 1, 1)
            self._stacks[names] = np.stack(
                [SCALES[self.scales[name]].to(self.columns[name], speeds) for name in names]
            )
        return self._stacks[names]

    def __len__(self) -> int:
        """Return the number of rows."""
        return int(np.prod([nodes.size for nodes in self.axes]))

    def at(
        self,
        altitude: ArrayLike,
        speed: ArrayLike,
        angle_of_attack: ArrayLike | None = None,
        sideslip: ArrayLike = 0.0,
        *,
        columns: Sequence[str] | None = None,
    ) -> dict[str, Floats]:
        """Return columns between the nodes.

        Parameters
        ----------
        altitude, speed : (...,) array_like [m], [m/s]
        angle_of_attack : (...,) array_like [rad], optional
            The only one of the grid where there is one.
        sideslip : (...,) array_like [rad]
        columns : sequence of str, optional
            Which; all when None.

        Returns
        -------
        dict of str to (...,) array
            NaN outside the grid; an axis of one value answers at that value only.

        Raises
        ------
        ValueError
            If a column is not in the database, or no angle of attack is given where the grid has several.

        Notes
        -----
        Multilinear in altitude, speed and both angles: of the value, of its logarithm for Knudsen number and
        density, of ln(q/V^3), carried on through zero, for a heat flux q (`SCALES`).
        """
        if angle_of_attack is None:
            if self.axes[2].size > 1:
                raise ValueError("angle_of_attack is not given, and the database has several")
            angle_of_attack = self.axes[2][0]
        names = tuple(self.columns) if columns is None else tuple(columns)
        unknown = [name for name in names if name not in self.columns]
        if unknown:
            raise ValueError(f"the database has no column '{unknown[0]}'; it has: {', '.join(self.columns)}")
        where = np.broadcast_arrays(*(floats(v) for v in (altitude, speed, angle_of_attack, sideslip)))
        found = multilinear(self.axes, self._stack(names), where)
        return {n: SCALES[self.scales[n]].back(found[i], where[1]) for i, n in enumerate(names)}

    @property
    def reach(self) -> str:
        """What the axes span, for people."""
        altitude, speed, *angles = self.axes
        parts = [
            f"altitude {_span(altitude * 1e-3)} km",
            f"speed {_span(speed * 1e-3)} km/s",
            f"angle of attack {_span(np.degrees(angles[0]))} deg",
            f"sideslip {_span(np.degrees(angles[1]))} deg",
        ]
        return ", ".join(parts)

    def table(self) -> dict[str, Floats]:
        """Return the database in long form: one row a combination, altitude changing slowest."""
        nodes = [np.round(a * axis.per_si, 12) for a, axis in zip(self.axes, AXES, strict=True)]
        spread = np.meshgrid(*nodes, indexing="ij")
        keys = {axis.column: values.reshape(-1) for axis, values in zip(AXES, spread, strict=True)}
        return keys | {name: values.reshape(-1) for name, values in self.columns.items()}

    def write(self, out: str | Path, *, replace: bool = False) -> list[str]:
        """Write it to FILE.parquet, FILE.csv or a folder, whole or not at all.

        Returns
        -------
        list of str
            What was written; in a folder both tables and `database.json`, the record.
        """
        from aero.survey.database_files import write_database

        return write_database(self, out, replace=replace)

    @classmethod
    def read(cls, path: str | Path) -> Database:
        """Read a database from FILE.parquet, FILE.csv or the folder that holds one.

        Raises
        ------
        InputError
            If it cannot be read or is no whole grid.
        """
        from aero.survey.database_files import read_table

        table, record, source = read_table(Path(path))
        return cls.from_table(table, record, source)

    @classmethod
    def from_table(cls, table: Mapping[str, Floats], record: dict[str, Any], source: str) -> Database:
        """Return the grid that a table in long form holds, its rows in any order."""
        missing = [axis.column for axis in AXES if axis.column not in table]
        if missing:
            raise InputError(
                f"has no column '{missing[0]}', expected an aerodynamic database",
                source=source,
                remedy="make one with aero database",
            )
        nodes, places = zip(
            *(np.unique(table[axis.column], return_inverse=True) for axis in AXES), strict=True
        )
        shape = tuple(values.size for values in nodes)
        rows = table[AXES[0].column].size
        index = np.ravel_multi_index(places, shape) if rows else np.empty(0, dtype=np.intp)
        if rows == 0 or rows != np.prod(shape) or np.unique(index).size != rows:
            raise InputError(
                f"holds {rows} rows, expected one for each of {' x '.join(map(str, shape))} combinations",
                source=source,
                remedy="make it again with aero database",
            )
        order = np.argsort(index)
        names = [name for name in COLUMNS if name in table]
        columns = {name: floats(table[name])[order].reshape(shape) for name in names}
        axes = tuple(floats(v) / axis.per_si for v, axis in zip(nodes, AXES, strict=True))
        return cls(axes, columns, record, source)

    def __str__(self) -> str:
        return f"Aerodynamic database: {len(self)} rows over {self.reach}"


def _span(values: Floats) -> str:
    low, high = f"{values[0]:.6g}", f"{values[-1]:.6g}"
    return low if values.size == 1 else f"{low} to {high}"


def build_database(
    vehicle: Vehicle,
    altitude: ArrayLike,
    speed: ArrayLike,
    angle_of_attack: ArrayLike | None = None,
    sideslip: ArrayLike | None = None,
    *,
    atmosphere: Atmosphere | None = None,
    settings: Settings | None = None,
    latitude: float | None = None,
    longitude: float | None = None,
    date: np.datetime64 | None = None,
    progress: Progress | None = None,
) -> Database:
    """Compute a vehicle's coefficients at every combination, and how well they interpolate.

    Parameters
    ----------
    vehicle : Vehicle
    altitude, speed : (n,) array_like [m], [m/s]
        Ascending.
    angle_of_attack, sideslip : (n,) array_like [rad], optional
        Ascending; the vehicle's own unless given.
    atmosphere : Atmosphere, optional
        The U.S. Standard Atmosphere 1976 when None.
    settings : Settings, optional
    latitude, longitude : float, optional [rad]
        The one place of an atmosphere that needs one.
    date : datetime64, optional
        Its UTC.
    progress : callable, optional
        Called with the number of rows done since the last call; the check of interpolation counts too.

    Returns
    -------
    Database

    Raises
    ------
    InputError
        If a value lies out of reach, an axis does not ascend, or more than a million rows would result.

    Examples
    --------
    >>> from aero.body import Sphere, Vehicle
    >>> ball = Vehicle.from_shape(Sphere(diameter=1.0))
    >>> made = build_database(ball, [90e3, 100e3, 110e3], [7000.0, 8000.0])
    >>> len(made), made.at(95e3, 7500.0)["drag_coefficient"].round(2).item()
    (6, 1.43)
    """
    from aero.air import StandardAtmosphere1976

    angle = vehicle.angle_of_attack if angle_of_attack is None else angle_of_attack
    aside = vehicle.sideslip if sideslip is None else sideslip
    axes = tuple(np.atleast_1d(floats(values)) for values in (altitude, speed, angle, aside))
    chosen = Settings() if settings is None else settings
    grid = Grid(vehicle, axes, atmosphere or StandardAtmosphere1976(), chosen, latitude, longitude, date)
    grid.check()
    columns = grid.columns(progress=progress)
    errors = interpolation_errors(grid, columns, progress)
    from aero.survey.database_files import record_of

    drag = errors.get("drag_coefficient", {})
    by_axis = shares(grid, drag["at"]) if drag.get("largest_error") is not None else {}
    return Database(axes, columns, record_of(grid, columns, errors, by_axis))
