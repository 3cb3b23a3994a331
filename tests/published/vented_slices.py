"""Slices of air of the vented box F: those of the numerical experiment, and ours."""

from published.command import solved
from published.slices import slice_of_vented

F_SLICES_K = {0.1: 0.43, 0.25: 2.37, 0.5: 3.76, 0.75: 12.8, 0.9: 25.1}
"""Rise of the experiment by share of the height [K]."""
_INSIDE = (0.100, 0.152, 0.254)
_BOARD = {"along": 0.140, "thickness": 0.002, "low": 0.027, "high": 0.227}


def slice_of_f(height: float) -> float:
    """Our mean rise of the slice at a share of the height [K]."""
    return slice_of_vented(solved("vented_board"), _INSIDE, _BOARD, height)
