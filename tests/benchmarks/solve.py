"""Time the cold solve of each sample's networks against a general root finder.

Run it as ``python tests/benchmarks/solve.py [REPETITIONS]``. Both start from the same first guess
and find the root of the same residual; building the network and the first guess are not timed.
The general one is ``scipy.optimize.root(method="hybr")`` with its usual settings.
"""

import statistics
import sys
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
from samples import by_size
from scipy.optimize import root

sys.path.insert(0, str(Path(__file__).parent.parent.parent))

from enclosure_check.description.load import load_document
from enclosure_check.network.build import build_network
from enclosure_check.network.network import Network
from enclosure_check.solve.steady import solve_steady

# The general root finder differences the Jacobian of hundreds of unknowns: seconds a time.
GENERAL_REPETITIONS = 1


def general(network: Network, start: np.ndarray):
    """Find the rises of the unknown nodes with the general root finder."""

    def residual(unknown: np.ndarray) -> np.ndarray:
        return network.imbalance(network.full_rise(unknown[:, None]))[network.unknown, 0]

    return root(residual, start[:, 0], method="hybr")


def median_s(run: Callable[[], object], repetitions: int) -> float:
    """Give the median time of a run [s]."""
    times = []
    for _ in range(repetitions):
        start = time.perf_counter()
        run()
        times.append(time.perf_counter() - start)
    return statistics.median(times)


def main() -> None:
    repetitions = int(sys.argv[1]) if len(sys.argv) > 1 else 15
    print(f"medians of {repetitions}, hybr of {GENERAL_REPETITIONS}; both have run once before")
    print("document / condition                     unknowns  here ms  hybr ms  ratio  largest K")
    for path in by_size():
        for case in load_document(str(path)).cases():
            network = build_network(case)
            start = network.first_guess()
            ours, theirs = solve_steady(network, start), general(network, start)
            difference = np.max(np.abs(ours.rise[network.unknown, 0] - theirs.x))
            here = median_s(lambda n=network, s=start: solve_steady(n, s), repetitions)
            there = median_s(lambda n=network, s=start: general(n, s), GENERAL_REPETITIONS)
            name = f"{path.stem} / {case.condition}"
            failed = "" if theirs.success and ours.converged else "  NOT CONVERGED"
            print(
                f"{name:40s} {len(network.unknown):8d} {here * 1e3:8.2f} {there * 1e3:8.1f} "
                f"{there / here:6.1f}  {difference:9.1e}{failed}"
            )


if __name__ == "__main__":
    main()
