"""Solve random documents and print how the solver fared.

Run it as ``python tests/benchmarks/random_documents.py [COUNT] [FIRST_SEED]``; 1,000 documents from
seed 0 by default. It ends with exit code 1 when any of them does not converge.
"""

import random
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))
sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

import numpy as np
from support.cases import LEAST_HEAT_W, network_of
from support.random_documents import random_document

from enclosure_check.solve.steady import solve_steady


def main(
    count: int, first: int, make: Callable[[random.Random], dict[str, Any]] = random_document
) -> int:
    """Solve ``count`` documents that ``make`` gives, print the figures, and tell how many did not converge."""
    steps, fallbacks, shares, unknowns, failed = [], [], [], [], []
    spent = 0.0
    for seed in range(first, first + count):
        network = network_of(make(random.Random(seed)))
        start = time.process_time()
        solution = solve_steady(network)
        spent += time.process_time() - start
        worst = float(solution.worst_imbalance_w[0])
        if not solution.converged:
            node = network.node_labels[int(solution.worst_node[0])]
            failed.append(f"seed {seed}: {solution.outcome[0].name} at {node}, {worst:.3g} W")
            continue
        steps.append(int(solution.steps[0]))
        fallbacks.append(int(solution.fallbacks[0]))
        shares.append(worst / max(float(solution.heat_w[0]), LEAST_HEAT_W))
        unknowns.append(len(network.unknown))
    print(f"documents               {count} (seeds {first} to {first + count - 1})")
    print(f"not converged           {len(failed)}")
    print(f"unknowns                median {np.median(unknowns):.0f}, most {max(unknowns)}")
    print(
        f"Newton steps            median {np.median(steps):.0f}, "
        f"99 % {np.percentile(steps, 99):.0f}, most {max(steps)}"
    )
    print(f"steps taken back        {sum(fallbacks)} in all, most {max(fallbacks)}")
    print(f"worst relative imbalance {max(shares):.2e} of the heat that flows")
    print(f"solving                 {1e3 * spent / count:.2f} ms of processor time each")
    print("\n".join(failed))
    return len(failed)


if __name__ == "__main__":
    given = [int(word) for word in sys.argv[1:3]]
    sys.exit(1 if main(*[*given, *[1000, 0][len(given) :]]) else 0)
