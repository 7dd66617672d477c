"""Values as strict JSON."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import Any

import numpy as np


def plain_json(value: Any) -> Any:
    """Return a value as strict JSON: numpy unwrapped, dates as text, a missing number as None."""
    if isinstance(value, Mapping):
        return {str(k): plain_json(v) for k, v in value.items()}
    if isinstance(value, (list, tuple)):
        return [plain_json(v) for v in value]
    if isinstance(value, np.datetime64):
        return f"{value}Z"
    if isinstance(value, (np.ndarray, np.generic)):
        return plain_json(value.tolist())
    if isinstance(value, float) and not math.isfinite(value):
        return None
    return value
