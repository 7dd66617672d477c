"""Force coefficients in the two limits: free-molecular and continuum."""

from aero.force.coefficients import Coefficients
from aero.force.free_molecular import free_molecular

__all__ = ["Coefficients", "free_molecular"]
