"""Which method a stretch of flight calls for, and why, in a sentence.

Three numbers decide. The free-stream Knudsen number says whether the body is small against the free
path; the Knudsen number of the shock layer says whether the heated gas in front of it is a continuum;
the Knudsen number of the re-emitted molecules says whether those leaving the wall still shield the
body. The limit 10 is customary (common practice, no source); the stand-off as the length of the shock
layer and its limit 0.2 are judgement.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from aero.arrays import ArrayLike, Floats, floats

METHODS = (
    "Navier-Stokes",
    "Navier-Stokes with slip and temperature-jump wall",
    "DSMC",
    "free-molecular",
)
LAYER_LIMIT = 0.2  # judgement: a stand-off of fewer than five paths holds no continuum layer
SHIELD_LIMIT = 10.0  # emitted Knudsen number above which shielding by the wall's own molecules is < 10 %


def advise(
    kn: ArrayLike, kn_layer: ArrayLike, kn_emitted: ArrayLike, bounds: Sequence[float]
) -> tuple[NDArray[np.int8], NDArray[np.int8]]:
    """Return the position in `METHODS` and in `REASONS` for each point.

    Parameters
    ----------
    kn : (...,) array
        Free-stream Knudsen number.
    kn_layer : (...,) array
        Free path behind the shock over the stand-off; NaN where there is no shock or no nose.
    kn_emitted : (...,) array
        Knudsen number of the re-emitted molecules; NaN where there is no speed.
    bounds : sequence of three floats
        Regime bounds.

    Examples
    --------
    >>> method, why = advise([1e-4, 0.05, 1.0, 12.0, 300.0], np.nan, [1e-5, 1e-2, 0.3, 2.0, 60.0], (0.01, 0.1, 10))
    >>> [METHODS[m] for m in method][3]
    'DSMC'
    """
    k, layer, shield = np.broadcast_arrays(floats(kn), floats(kn_layer), floats(kn_emitted))
    method = np.zeros(k.shape, dtype=np.int8)
    why = np.zeros(k.shape, dtype=np.int8)

    def put(where: NDArray[np.bool_], which: int, reason: int) -> None:
        method[where] = which
        why[where] = reason

    slip = (k >= bounds[0]) & (k < bounds[1])
    put(slip, 1, 1)
    put((k < bounds[1]) & (layer >= LAYER_LIMIT), 2, 2)
    put((k >= bounds[1]) & (k < bounds[2]), 2, 3)
    free = k >= bounds[2]
    put(free & ~(shield < SHIELD_LIMIT), 3, 4)
    put(free & (shield < SHIELD_LIMIT), 2, 5)
    return method, why


REASONS = (
    "the free path is under {slip:g} of the length and the shock layer is a continuum",
    "velocity slip and a temperature jump at the wall show, the gas away from it is still a continuum",
    "the free path behind the shock exceeds {layer:g} of the stand-off: the shock layer is no continuum, "
    "although the free stream is",
    "neither collisions nor free flight rule",
    "oncoming molecules meet neither each other nor those leaving the wall within the length",
    "the free stream is collisionless at this length, but molecules leaving the cold wall still shield it "
    "(their Knudsen number is below {shield:g})",
)


def sentence(reason: int, bounds: Sequence[float]) -> str:
    """Return a reason as a sentence without a full stop."""
    return REASONS[reason].format(slip=bounds[0], layer=LAYER_LIMIT, shield=SHIELD_LIMIT)


def majority(method: np.ndarray, why: np.ndarray, weight: Floats) -> tuple[int, int, tuple[int, ...]]:
    """Return the method that carries most weight, its reason, and the other methods met.

    Parameters
    ----------
    method, why : (n,) arrays of int
        From `advise`, n >= 1.
    weight : (n,) array
        What each point counts: its share of the heat load, or of the time.
    """
    share = np.bincount(method, weights=weight, minlength=len(METHODS))
    if share.sum() <= 0.0:
        share = np.bincount(method, minlength=len(METHODS)).astype(np.float64)
    best = int(np.argmax(share))
    inside = method == best
    reason = int(np.bincount(why[inside], minlength=len(REASONS)).argmax())
    others = tuple(int(m) for m in np.unique(method) if m != best)
    return best, reason, others
