"""Forces in the two limits: coefficients of drag and lift, and whole loads (force and moment) by elements."""

from aero.force.coefficients import Coefficients
from aero.force.continuum import continuum
from aero.force.free_molecular import free_molecular
from aero.force.load_continuum import continuum_loads
from aero.force.load_limits import free_molecular_loads, projected_area
from aero.force.loads import Loads, Stability, flow_direction, lift_direction, stability_derivative
from aero.force.newtonian import BASE_SIGMA, above_newtonian
from aero.force.tumbling import Tumbling, tumbling_drag

__all__ = [
    "BASE_SIGMA",
    "Coefficients",
    "Loads",
    "Stability",
    "Tumbling",
    "above_newtonian",
    "continuum",
    "continuum_loads",
    "flow_direction",
    "free_molecular",
    "free_molecular_loads",
    "lift_direction",
    "projected_area",
    "stability_derivative",
    "tumbling_drag",
]
