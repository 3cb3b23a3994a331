"""Solve random documents with openings and wind, and print how the solver fared.

Run it as ``python tests/benchmarks/random_vented.py [COUNT] [FIRST_SEED]``; 2,000 documents from seed
0 by default. It ends with exit code 1 when any of them does not converge.
"""

import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))
sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from benchmarks.random_documents import main
from support.random_openings import random_vented_document

if __name__ == "__main__":
    given = [int(word) for word in sys.argv[1:3]]
    count, first = [*given, *[2000, 0][len(given) :]]
    sys.exit(1 if main(count, first, random_vented_document) else 0)
