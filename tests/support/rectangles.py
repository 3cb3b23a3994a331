"""Rectangles and boxes for view factors, and ways to count them that share nothing with ours.

Import it as ``from support.rectangles import patches`` (``tests`` is on the path).
"""

import numpy as np

from enclosure_check.physics.view_factors import Boxes, Rectangles

EXACT = 1e-9  # rounding of a closed form over an area
COUNTED = 0.01  # an obstructed pair, as a share of the larger area
RAYS = 40_000  # of one patch in the ray count: standard deviation below 0.0025 of its area
NONE = Boxes(np.empty((0, 3)), np.empty((0, 3)))


def patches(*rows):
    """Rectangles from rows of axis, sign, position, (low, low), (high, high)."""
    axis, sign, position, low, high = zip(*rows, strict=True)
    return Rectangles(
        np.array(axis),
        np.array(sign, dtype=float),
        np.array(position, dtype=float),
        np.array(low, dtype=float),
        np.array(high, dtype=float),
    )


def boxes(*corners):
    return Boxes(*(np.array([c[k] for c in corners], dtype=float) for k in range(2)))


def faces(low, high, inward, cuts=((), (), ()), sides="xXyYzZ"):
    """Rows of the faces of a cuboid, cut at coordinates between 0 and 1 along each axis."""
    rows, low, high = [], np.array(low, dtype=float), np.array(high, dtype=float)
    ends = [low[k] + (high - low)[k] * np.array([0.0, *cuts[k], 1.0]) for k in range(3)]
    for axis in range(3):
        a, b = (ends[k] for k in range(3) if k != axis)
        for side, letter in enumerate(("xyz"[axis], "XYZ"[axis])):
            if letter in sides:
                rows += [
                    (axis, (1 - 2 * side) * (1 if inward else -1), (low, high)[side][axis],
                     (a[i], b[j]), (a[i + 1], b[j + 1]))
                    for i in range(len(a) - 1) for j in range(len(b) - 1)
                ]  # fmt: skip
    return rows


def opposed(a, b, gap=1.0):
    """View factor of equal directly opposed rectangles (Howell's catalogue C-11, from memory)."""
    x, y = a / gap, b / gap
    s, t = np.sqrt(1 + x * x), np.sqrt(1 + y * y)
    bracket = 0.5 * np.log(s * s * t * t / (1 + x * x + y * y)) - x * np.arctan(x)
    bracket += x * t * np.arctan(x / t) + y * s * np.arctan(y / s) - y * np.arctan(y)
    return 2 / (np.pi * x * y) * bracket


def adjoining(away, other, common=1.0):
    """View factor to a rectangle at right angles on a common edge (C-14, from memory)."""
    w, h = (away / common) ** 2, (other / common) ** 2
    log = np.log((1 + w) * (1 + h) / (1 + w + h))
    log += w * np.log(w * (1 + w + h) / ((1 + w) * (w + h)))
    log += h * np.log(h * (1 + w + h) / ((1 + h) * (w + h)))
    angles = sum(sign * np.sqrt(q) * np.arctan(1 / np.sqrt(q))
                 for sign, q in ((1, w), (1, h), (-1, w + h)))  # fmt: skip
    return (angles + 0.25 * log) / (np.pi * np.sqrt(w))


def spread(patch, k, u, v):
    """Points of patch k at the shares u, v of its extents, shape (..., 3)."""
    low, high = patch.corners[k]
    one, two = (i for i in range(3) if i != patch.axis[k])
    points = np.broadcast_to(low, (*np.shape(u), 3)).copy()
    points[..., one] += u * (high - low)[one]
    points[..., two] += v * (high - low)[two]
    return points


def kernel(patch, i, j, start, end):
    """Kernel cos cos / (pi r^2) of the view factor, zero behind either face."""
    step = end - start
    r2 = np.sum(step * step, axis=-1)
    cos_i = np.maximum(step[..., patch.axis[i]] * patch.sign[i], 0.0)
    cos_j = np.maximum(-step[..., patch.axis[j]] * patch.sign[j], 0.0)
    return cos_i * cos_j / (np.pi * r2 * r2)


def integrated(patch, i, j, order=16):
    """Double area integral of the kernel by Gauss-Legendre quadrature."""
    node, weight = np.polynomial.legendre.leggauss(order)
    grid = np.meshgrid(*[0.5 * (node + 1.0)] * 4, indexing="ij")
    weights = np.einsum("i,j,k,l->ijkl", *[0.5 * weight] * 4)
    values = kernel(patch, i, j, spread(patch, i, *grid[:2]), spread(patch, j, *grid[2:]))
    return patch.area[i] * patch.area[j] * np.sum(weights * values)


def ray_count(patch, obstacle, i, rng, rays=RAYS):
    """View factors of patch i by counting which patch rays of a diffuse emitter hit first."""
    start = spread(patch, i, *rng.random((2, rays)))
    radius, turn = np.sqrt(rng.random(rays)), 2.0 * np.pi * rng.random(rays)
    along = np.empty((rays, 3))
    along[:, patch.axis[i]] = patch.sign[i] * np.sqrt(1.0 - radius**2)
    one, two = (k for k in range(3) if k != patch.axis[i])
    along[:, one], along[:, two] = radius * np.cos(turn), radius * np.sin(turn)
    nearest, hit = np.full(rays, np.inf), np.full(rays, -1)
    flat = [(k, patch.axis[k], *patch.corners[k], patch.sign[k]) for k in range(len(patch.axis))]
    for low, high in zip(obstacle.low, obstacle.high, strict=True):
        for axis in range(3):
            for side in (low, high):
                ends = np.stack((low, high))
                ends[:, axis] = side[axis]
                flat.append((-1, axis, *ends, 0.0))
    for k, axis, low, high, sign in flat:
        with np.errstate(divide="ignore", invalid="ignore"):
            t = (low[axis] - start[:, axis]) / along[:, axis]
            at = start + t[:, None] * along
        rest = [m for m in range(3) if m != axis]
        inside = ((at[:, rest] >= low[rest]) & (at[:, rest] <= high[rest])).all(axis=1)
        facing = along[:, axis] * sign < 0.0 if sign else np.ones(rays, dtype=bool)
        # A patch on an obstacle's face comes later than that face by rounding only: patches win.
        closer = (t > 1e-9) & (t < nearest + (-1e-12 if k < 0 else 1e-12)) & inside & facing
        nearest, hit = np.where(closer, t, nearest), np.where(closer, k, hit)
    return np.bincount(hit[hit >= 0], minlength=len(patch.axis)) / rays


HALVES = ((0.4,), (0.5,), (0.45,))
ROOM = ((0.0, 0.0, 0.0), (0.2, 0.12, 0.15))
LAYOUTS = {
    "one board": [((0.03, 0.05, 0.02), (0.17, 0.0516, 0.13))],
    "two boards facing": [
        ((0.02, 0.04, 0.02), (0.18, 0.0416, 0.13)), ((0.02, 0.06, 0.0), (0.16, 0.0616, 0.15)),
    ],
    "sheet without thickness": [((0.1, 0.0, 0.03), (0.1, 0.12, 0.15))],
    "body in the air": [((0.06, 0.03, 0.05), (0.13, 0.08, 0.09))],
    "bodies on floor and board": [
        ((0.03, 0.05, 0.02), (0.17, 0.0516, 0.13)), ((0.05, 0.0516, 0.05), (0.09, 0.09, 0.1)),
        ((0.11, 0.07, 0.0), (0.15, 0.1, 0.06)),
    ],
}  # fmt: skip


def layout(name):
    rows = faces(*ROOM, True, HALVES)
    for low, high in LAYOUTS[name]:
        thin = [k for k in range(3) if high[k] - low[k] == 0.0]
        sides = "xXyYzZ" if not thin else "xyz"[thin[0]] + "XYZ"[thin[0]]
        rows += faces(low, high, False, sides=sides)
    return patches(*rows), boxes(*LAYOUTS[name])
