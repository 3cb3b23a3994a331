"""x"""
import numpy as np

def cells_spreading(
    plate: tuple[float, float],
    counts: tuple[int, int],
    sheet: float,
    low: tuple[float, float],
    size: tuple[float, float],
) -> float:
    """What equal cells tell of a source's mean rise over its plate's, per watt [K/W].

    By their conduction matrix, solved; two films of 10 W/m2K, as everywhere for spreading.
    """
    n, m = counts
    steps = plate[0] / n, plate[1] / m
    matrix = np.zeros((n * m, n * m))
    share = np.zeros(n * m)
    for i in range(n):
        for j in range(m):
            own = i * m + j
            matrix[own, own] += 20.0 * steps[0] * steps[1]
            for other, along, inside in (
                (own + m, sheet * steps[1] / steps[0], i + 1 < n),
                (own + 1, sheet * steps[0] / steps[1], j + 1 < m),
            ):
                if inside:
                    matrix[own, own] += along
                    matrix[other, other] += along
                    matrix[own, other] -= along
                    matrix[other, own] -= along
            part_of = 1.0
            for at, step, start, extent in zip((i, j), steps, low, size, strict=True):
                shared = min((at + 1) * step, start + extent) - max(at * step, start)
                part_of *= max(shared, 0.0) / extent
            share[own] = part_of
    rise = np.linalg.solve(matrix, share)
    return float(share @ rise - 1.0 / (20.0 * plate[0] * plate[1]))
