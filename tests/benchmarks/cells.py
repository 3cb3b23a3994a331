"""Time the cold solve of a sample over the number of cells of its board, and print the growth.

It is solved as a check solves its first condition; medians of a few solves, each of a new network.

Run it as ``python tests/benchmarks/cells.py``. Ratios within one run, not absolute times, are what it
is for: the growth of the solve with the cells, from 256 to 16,384 of them.
"""

import math
import os
import statistics
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
CELLS = (144, 256, 324, 576, 1024, 2304, 4096, 9216, 16384)

REPETITIONS = 5


def main() -> None:
    """Print a row per number of cells, then the exponent from the second row to the last."""
    # Before numpy is imported: one thread is faster for matrices of this size.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    sys.path.insert(0, str(ROOT))
    from enclosure_check.description.load import load_document
    from enclosure_check.network.build import build_network
    from enclosure_check.network.grid import GridOptions
    from enclosure_check.solve.nearby import solve_known

    case = load_document(str(ROOT / "sample_boards" / "wall_sensor_hub.yaml")).cases()[0]
    # Imports the sparse library.
    solve_known(build_network(case, GridOptions(board_cells=1024)), None)
    spent = {}
    print("  cells  unknowns   steps  build ms  solve ms")
    for cells in CELLS:
        builds, solves = [], []
        for _ in range(REPETITIONS):
            start = time.process_time()
            network = build_network(case, GridOptions(board_cells=cells))
            built = time.process_time()
            solution = solve_known(network, None).solution
            builds.append(built - start)
            solves.append(time.process_time() - built)
        if not solution.converged:
            raise SystemExit(f"{cells} cells: {solution.outcome[0].value}")
        spent[cells] = statistics.median(solves)
        print(
            f"{cells:7d} {len(network.unknown):9d} {int(solution.steps[0]):7d} "
            f"{1e3 * statistics.median(builds):9.1f} {1e3 * spent[cells]:9.1f}"
        )
    first, last = CELLS[1], CELLS[-1]
    growth = math.log(spent[last] / spent[first]) / math.log(last / first)
    print(f"from {first} to {last} cells the solve grows as cells^{growth:.2f}")


if __name__ == "__main__":
    main()
