"""How much is in doubt where the flow along an upright plate may be laminar or turbulent."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
from numpy.typing import ArrayLike

from enclosure_check.physics.plates import churchill_chu, vertical_plate
from enclosure_check.physics.smooth import smoothstep

FloatArray = npt.NDArray[np.float64]

#: Rayleigh number up to which the laminar law is not in doubt, a decade under the authors' own
#: change-over [-].
DOUBTED_FROM = 1e8


def transition_distance(ra: ArrayLike, pr: ArrayLike) -> FloatArray:
    """How far the authors' full law lies above `vertical_plate` where its flow may be either.

    ``t (Nu_full / Nu - 1)``, ``t = smoothstep(log10 Ra - 8)``: nothing up to Ra = 1e8; the whole
    distance between the authors' two laws at 1e9, where theirs change over; nothing again from
    1e10, where ours is their full law. Where doubt begins, a decade below their change-over, is
    ours.

    Parameters
    ----------
    ra : array_like
        Rayleigh number with the height [-].
    pr : array_like
        Prandtl number [-].

    Returns
    -------
    ndarray
        Share of ours by which the full law is higher [-], broadcast shape.

    References
    ----------
    S. W. Churchill, H. H. S. Chu, 1975, see `plates.churchill_chu`.
    """
    ra = np.maximum(np.asarray(ra, dtype=np.float64), DOUBTED_FROM)
    doubt = smoothstep(np.log10(ra / DOUBTED_FROM))
    return np.asarray(doubt * (churchill_chu(ra, pr) / vertical_plate(ra, pr) - 1.0))
