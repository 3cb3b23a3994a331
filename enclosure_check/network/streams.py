"""Streams along faces as sums over the air nodes: what they carry on, and what a watt adds."""

import numpy as np

from enclosure_check.network.links import FloatArray


def march(picked: FloatArray, kept: FloatArray) -> FloatArray:
    """Heat a stream carries from each node on: ``E_j = (E_(j-1) + Q_j) r_j``, (s, n - 1, c)."""
    carried = np.zeros((picked.shape[0], picked.shape[1] - 1, kept.shape[2]))
    stream: FloatArray = np.zeros((picked.shape[0], kept.shape[2]))
    for j in range(picked.shape[1] - 1):
        stream = (stream + picked[:, j]) * kept[:, j]
        carried[:, j] = stream
    return carried


def passing(kept: FloatArray) -> FloatArray:
    """What a watt picked up at node i makes each lift j carry, shape (s, n, n - 1)."""
    count, steps = kept.shape
    passed = np.zeros((count, steps + 1, steps))
    for i in range(steps):
        passed[:, i, i:] = np.cumprod(kept[:, i:], axis=1)
    return passed
