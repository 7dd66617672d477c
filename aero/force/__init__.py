"""Force coefficients in the two limits: free-molecular and continuum."""

from aero.force.coefficients import Coefficients
from aero.force.continuum import continuum
from aero.force.free_molecular import free_molecular
from aero.force.newtonian import BASE_SIGMA, above_newtonian

__all__ = ["BASE_SIGMA", "Coefficients", "above_newtonian", "continuum", "free_molecular"]
