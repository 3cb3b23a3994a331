"""Plates on the cells of the program that lose heat evenly, solved by its own solver."""

import numpy as np

from enclosure_check.network.builder import NetworkBuilder
from enclosure_check.network.grid import GridOptions, PlateGrid, cell_counts
from enclosure_check.network.links import LinkLabel
from enclosure_check.network.network import Places
from enclosure_check.network.site import Site
from enclosure_check.network.spots import Spots
from enclosure_check.solve.steady import solve_steady

REFERENCE_K = 298.15
# Heat is put in by so much less, for the sake of large resistances. [-]
HEAT = 1e-3


class Plates:
    """Plates that lose heat evenly to one node; built as the box's own are."""

    plate, conduct_along = Site.plate, Site.conduct_along

    def __init__(self):
        self.builder = NetworkBuilder(REFERENCE_K, 101325.0)
        self.ambient = self.builder.node("ambient", REFERENCE_K)
        self.spots = Spots(self.builder)
        self.grids, self.nodes = {}, {}
        self.wall_outside, self.wall_inside = {}, {}

    def add(self, name, grid, film, share=1.0):
        """Add a plate, or one face of it with its share of conduction and film [W/m2K]."""
        self.grids[name] = grid
        nodes = self.plate(name, grid)
        self.conduct_along(nodes.cells, grid, share, LinkLabel(f"plate:{name}", "along"))
        loss = LinkLabel(f"plate:{name}", "loss")
        self.builder.conduct(nodes.cells, self.ambient, share * film * grid.cell_area, loss)
        self.nodes[name] = nodes
        return nodes

    def heat(self, node, watts):
        self.builder.heat(node, HEAT * watts, LinkLabel("part:S", "power"))

    def heated(self, name, low, size, watts):
        """Put an even source on a plate; gives its spot."""
        # Behind a resistance so large that its heat is even over the area; see `HEAT`.
        node = self.builder.node("source")
        label = LinkLabel("part:S", "to_plate")
        grid, plate = self.grids[name], self.nodes[name]
        spot = self.spots.add(node, 1e6, grid, plate, low, size, label, f"under {node}")
        self.heat(node, watts)
        return spot

    def rise(self):
        """Rises of all nodes [K]; conduction is linear."""
        ambient = self.ambient
        self.spots.join()
        places = Places(
            ambient=ambient,
            air=ambient,
            air_nodes=np.array([ambient]),
            air_heights=np.zeros(1),
            wall_outside={},
            wall_inside={},
            boards=self.nodes,
            parts={},
        )
        solution = solve_steady(self.builder.finish(places))
        assert solution.converged
        return solution.rise[:, 0] / HEAT


def default_counts(length, width):
    return cell_counts(length, width, GridOptions().board_cells)


def flat(length, width, kt, counts=None):
    """A plate in the plane of x and y."""
    counts = counts or default_counts(length, width)
    sheet = np.full((2, *counts), kt)
    return PlateGrid((0, 1), (0.0, 0.0, 0.0), (length, width, 0.0), counts, sheet)


def at_edge(cells):
    """Value on an adiabatic edge from the two cells next to it: about it the rise is even."""
    return (9 * cells[0] - cells[1]) / 8


def on_edges(cells):
    """Rises in the middle of the first edge, and in the low corner."""
    line = at_edge(cells)
    middle = (line[line.size // 2] + line[(line.size - 1) // 2]) / 2
    return middle, at_edge(line)
