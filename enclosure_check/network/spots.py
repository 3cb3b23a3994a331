"""Where heat enters plates over areas smaller than cells tell apart: joined so that it counts once.

A contact gives its heat evenly to the area it covers; the cells tell the mean rise there, and what
they do not resolve of it, its own or that of contacts close by, is added: see `Spots.join`.
"""

from collections.abc import Callable, Hashable, Sequence
from functools import lru_cache, partial

import numpy as np

from enclosure_check.description.frames import Vector
from enclosure_check.network.builder import LEAST_RESISTANCE, NetworkBuilder
from enclosure_check.network.grid import SPREADING_FILM_W_PER_M2K, PlateGrid, kept
from enclosure_check.network.lines import Segment
from enclosure_check.network.links import FloatArray, IntArray, LinkLabel
from enclosure_check.network.network import PlateNodes
from enclosure_check.physics.mutual import mutual_rise
from enclosure_check.records import dataclass, field

# What of a resistance is left at the least where a spreading term is taken off it. [-]
LEAST_SHARE_LEFT = 0.1
# Contacts further apart than this are told each other's rise by the cells alone. [cells]
FARTHEST_CELLS = 3.0
# Largest part of the contacts' own resistances that mutual ones may take away. [-]
MOST_TAKEN = 0.9
_SHEET_STEP = 1e-3
# Ending of the role of what makes the heat of one contact felt under others.
FELT = ", felt"

# Builds a piece of a network, by its name; see `Site.piece`.
Piece = Callable[[tuple[str, Hashable], Callable[[], None]], None]
_Ends = tuple[tuple[float, float], tuple[float, float]]


@dataclass(frozen=True)
class Spot:
    """Where a source meets a plate: its node, and how much hotter its middle is per watt."""

    node: int
    peak_k_per_w: float


@dataclass(frozen=True, eq=False)
class Contact:
    """Where heat from a node enters a plate.

    ``resistance`` in all, of which ``held`` is what the cells do not resolve [K/W]; the ``places``
    of the cells that take it, as indices (2, k), and their ``shares``; its rectangle on the plate,
    ends by axis [m]. Contacts of one ``line`` know of each other already. ``spot`` shows the
    plate's temperature under it.
    """

    node: int
    resistance: float
    held: float
    places: tuple[IntArray, IntArray]
    shares: FloatArray
    ends: _Ends
    label: LinkLabel
    line: str | None = None
    spot: int | None = None


@dataclass
class Spots:
    """Contacts being collected, plate by plate."""

    builder: NetworkBuilder
    contacts: list[tuple[PlateGrid, PlateNodes, Contact]] = field(default_factory=list)
    """Each with its plate."""
    _by_sheet: dict[LinkLabel, float] = field(default_factory=dict)

    def add(
        self,
        node: int,
        resistance: float,
        grid: PlateGrid,
        plate: PlateNodes,
        low: Vector,
        size: Vector,
        label: LinkLabel,
        name: str,
    ) -> Spot:
        """Join a node to the cells under it by a resistance over an area of a plate.

        The resistance and what the cells do not resolve of the spreading are in series.

        Parameters
        ----------
        node
            Where the heat comes from.
        resistance
            From there to the plate [K/W].
        grid, plate
            The wall or board, and the face of it.
        low, size
            Extent of the area in the box frame [m].
        label
            Of the links.
        name
            Of the node that shows the plate's mean temperature under the area.

        Returns
        -------
        Spot
            That node.
        """
        shares = grid.taken(low, size)
        self.builder.label(label)
        places = np.nonzero(shares)
        share = shares[places]
        added, peak = grid.sub_cell(low, size)
        # Where the cells tell too high a temperature for a source, that is given back, within what
        # leaves a resistance.
        total = max(resistance + added, LEAST_SHARE_LEFT * resistance, LEAST_RESISTANCE)
        first, second = (
            (low[axis] - start, low[axis] + size[axis] - start)
            for axis, start in ((axis, grid.low[axis]) for axis in grid.axes)
        )
        spot = self.builder.node(name)
        self._add_contact(
            grid,
            plate,
            Contact(
                node,
                total,
                total - resistance,
                (places[0], places[1]),
                share,
                (first, second),
                label,
                spot=spot,
            ),
        )
        return Spot(spot, peak)

    def add_line(
        self,
        node: int,
        per_metre: float,
        grid: PlateGrid,
        plate: PlateNodes,
        pieces: Sequence[Segment],
        label: LinkLabel,
    ) -> None:
        """Add the pieces of a line that joins a node to a plate, whose own links are made."""
        for piece in pieces:
            resistance = (1.0 / per_metre + piece.held) / piece.length
            one, other = piece.places
            places = np.array([one[0], other[0]]), np.array([one[1], other[1]])
            shares = np.array(piece.shares)
            contact = Contact(
                node,
                resistance,
                piece.held / piece.length,
                places,
                shares,
                piece.ends,
                label,
                line=label.owner,
            )
            self._add_contact(grid, plate, contact)

    def _add_contact(self, grid: PlateGrid, plate: PlateNodes, contact: Contact) -> None:
        self.contacts.append((grid, plate, contact))

    def on(self, plate: Hashable) -> list[tuple[PlateGrid, PlateNodes, Contact]]:
        """Give the contacts on a plate, by the node of its mean."""
        return [each for each in self.contacts if each[1].mean == plate]

    def _by_plate(self) -> list[tuple[PlateGrid, PlateNodes, list[Contact]]]:
        plates: dict[int, tuple[PlateGrid, PlateNodes, list[Contact]]] = {}
        for grid, plate, contact in self.contacts:
            plates.setdefault(plate.mean, (grid, plate, []))[2].append(contact)
        return list(plates.values())

    def join(self, piece: Piece | None = None) -> None:
        """Join all contacts to their cells, and let their spots show the temperatures there.

        With the resistances ``D`` of the contacts and the mutual ones ``C`` that the cells do not
        resolve, ``D Q + C Q = T - S T_cells``, S the shares. A node under each contact keeps ``S
        T_cells + C Q``; its heat is ``Q = (T - T_under) / D``, taken by the cells' shares.
        ``piece`` builds those of each plate; see `Site.piece`.
        """
        for each in self._by_plate():
            if piece is None:
                self._join_plate(*each)
            else:
                piece(("contacts", each[1].mean), partial(self._join_plate, *each))

    def felt_by_sheet(self, label: LinkLabel) -> float:
        """Relative change of what is felt of a contact per that of its plate's conductance [-].

        The mean over the contacts that feel it.
        """
        if not self._by_sheet:
            for grid, _, contacts in self._by_plate():
                shares = np.zeros((len(contacts), *grid.counts))
                for row, contact in zip(shares, contacts, strict=True):
                    row[contact.places] = contact.shares
                more = 1.0 + _SHEET_STEP
                one, other = (_mutual(grid, contacts, shares, times) for times in (1.0, more))
                whole = np.maximum(np.abs(one).sum(axis=0), 1e-300)
                change = np.sum(np.sign(one) * (other - one), axis=0) / (_SHEET_STEP * whole)
                found = {each.label: float(own) for each, own in zip(contacts, change, strict=True)}
                self._by_sheet.update(found)
        return self._by_sheet.get(label, 0.0)

    def _join_plate(self, grid: PlateGrid, plate: PlateNodes, contacts: list[Contact]) -> None:
        count, builder = len(contacts), self.builder
        shares = np.zeros((count, *grid.counts))
        for row, contact in zip(shares, contacts, strict=True):
            row[contact.places] = contact.shares
        own = np.array([contact.resistance for contact in contacts])
        mutual = _bounded(_mutual(grid, contacts, shares), own)
        # A node under each contact but for lines that nothing is close to.
        under = {
            index: builder.node(f"under {each.label.owner.split(':', 1)[1]}, {each.label.role}")
            for index, each in enumerate(contacts)
            if each.line is None or mutual[index].any()
        }
        nodes = np.array([contact.node for contact in contacts], dtype=np.intp)
        places = np.array([under.get(index, -1) for index in range(count)], dtype=np.intp)
        felt = [LinkLabel(each.label.owner, each.label.role + FELT) for each in contacts]
        for index, node in under.items():
            contact = contacts[index]
            cells = plate.cells[contact.places]
            builder.keep_mean(node, cells, contact.shares)
            others = np.flatnonzero(mutual[index])
            if others.size:
                weights = -mutual[index, others] / own[others]
                labels = [felt[other] for other in others.tolist()]
                ends = nodes[others], places[others]
                builder.conduct_by(node, builder.nowhere, *ends, weights, labels)
            taken = contact.shares / contact.resistance
            if contact.line is None:
                builder.conduct_by(contact.node, cells, contact.node, node, taken, contact.label)
            else:
                # The links of a line's pieces alone are made: by what the cells tell under them.
                for cell, share in zip(cells, contact.shares, strict=True):
                    part = share * taken
                    builder.conduct_by(contact.node, cells, cell, node, part, contact.label)
            if contact.spot is not None:
                held = contact.held / contact.resistance
                two, weights = np.array([node, contact.node]), np.array([1.0 - held, held])
                builder.read(contact.spot, two, weights)


def _mutual(
    grid: PlateGrid, contacts: Sequence[Contact], shares: FloatArray, times: float = 1.0
) -> FloatArray:
    """Rise under one contact per watt into another that the cells do not resolve [K/W], (c, c).

    The plate conducts so many ``times`` what it does.
    """
    ends = tuple(contact.ends for contact in contacts)
    lines = tuple(contact.line for contact in contacts)
    return _unresolved(grid, ends, lines, shares.tobytes(), times)


@lru_cache(maxsize=64)
def _unresolved(
    grid: PlateGrid,
    all_ends: tuple[_Ends, ...],
    lines: tuple[str | None, ...],
    all_shares: bytes,
    times: float,
) -> FloatArray:
    """See `_mutual`; kept, as the same contacts come again under every condition."""
    count = len(lines)
    total = np.zeros((count, count))
    ends, shares = np.array(all_ends), np.frombuffer(all_shares).reshape(count, *grid.counts)
    first, second = np.triu_indices(count, 1)
    apart = np.maximum(
        ends[first, :, 0] - ends[second, :, 1], ends[second, :, 0] - ends[first, :, 1]
    )
    near = (apart < FARTHEST_CELLS * np.array(grid.steps)).all(axis=1)
    # Contacts by themselves each count as a line of their own.
    numbers = {line: number for number, line in enumerate(dict.fromkeys(lines))}
    line = np.array(
        [-1 - index if name is None else numbers[name] for index, name in enumerate(lines)]
    )
    near &= line[first] != line[second]
    first, second = first[near], second[near]
    if not first.size:
        return kept(total)
    sheet = times * np.einsum("aij,cij->ca", grid.sheet, shares)
    # Between two places of unlike copper, the mean of both.
    along = np.sqrt(sheet[first] * sheet[second])
    mean = np.sqrt(along[:, :1] * along[:, 1:])
    stretch = np.sqrt(mean / along)
    plate = np.array([grid.size[axis] for axis in grid.axes])
    exact = mutual_rise(
        ends[first] * stretch[:, :, None],
        ends[second] * stretch[:, :, None],
        plate * stretch,
        mean[:, 0],
        SPREADING_FILM_W_PER_M2K,
    )
    told = grid.told(shares, along, first, second)
    total[first, second] = total[second, first] = exact - told
    return kept(total)


def _bounded(mutual: FloatArray, own: FloatArray) -> FloatArray:
    """Take mutual resistances down where they would leave too little of the contacts' own."""
    if len(own) < 2 or not mutual.any():
        return mutual
    root = np.sqrt(own)
    least = float(np.linalg.eigvalsh(mutual / np.outer(root, root))[0])
    return mutual * min(1.0, MOST_TAKEN / max(-least, 1e-300))
