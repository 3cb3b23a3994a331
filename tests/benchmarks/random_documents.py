"""Solve random documents and print how the solver fared.

Run it as ``python tests/benchmarks/random_documents.py [COUNT] [FIRST_SEED]``; 1,000 documents from
seed 0 by default. It tells at once of every document that does not converge, raises or takes more
than 100 steps, and ends with exit code 1 when any of them did not converge. `tally.py` adds up what
several runs printed.
"""

import random
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))
sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from benchmarks.tally import Tally
from support.cases import LEAST_HEAT_W, network_of
from support.random_documents import random_document

from enclosure_check.solve.steady import solve_steady

Make = Callable[[random.Random], dict[str, Any]]
# More steps than these are told of.
LONG = 100


def main(count: int, first: int, make: Make = random_document) -> int:
    """Solve ``count`` documents that ``make`` gives, print the figures, and tell how many did not converge."""
    tally = Tally()
    for seed in range(first, first + count):
        told = solve(seed, make, tally)
        if told:
            print(told, flush=True)
    print(tally.line())
    print(f"seeds                   {first} to {first + count - 1}")
    print(tally.text())
    return len(tally.failed)


def solve(seed: int, make: Make, tally: Tally) -> str:
    """Solve one document, put down how it went, and say so if that was not well."""
    start = time.process_time()
    try:
        network = network_of(make(random.Random(seed)))
        start = time.process_time()
        solution = solve_steady(network)
    # Whatever an answer fails by is to be known of all documents, not of the first.
    except Exception as error:
        tally.failed.append(f"seed {seed}: {type(error).__name__}: {error}")
        return tally.failed[-1]
    spent = time.process_time() - start
    tally.processor_s += spent
    worst, steps = float(solution.worst_imbalance_w[0]), int(solution.steps[0])
    taken = f"{steps} steps, {int(solution.fallbacks[0])} taken back, {spent:.1f} s"
    if not solution.converged:
        node = network.node_labels[int(solution.worst_node[0])]
        outcome = solution.outcome[0].name
        tally.failed.append(f"seed {seed}: {outcome} at {node}, {worst:.3g} W; {taken}")
        return tally.failed[-1]
    tally.steps[steps] += 1
    tally.fallbacks[int(solution.fallbacks[0])] += 1
    tally.unknowns[round(len(network.unknown), -1)] += 1
    share = worst / max(float(solution.heat_w[0]), LEAST_HEAT_W)
    tally.worst_share = max(tally.worst_share, share)
    return f"seed {seed}: long, {taken}" if steps > LONG else ""


if __name__ == "__main__":
    given = [int(word) for word in sys.argv[1:3]]
    sys.exit(1 if main(*[*given, *[1000, 0][len(given) :]]) else 0)
