"""Fuzz the program with documents and part lists that a stranger might send.

Run it as ``python tests/benchmarks/fuzz.py [COUNT] [FIRST_SEED]``; 2,000 documents, with their part
lists, from seed 0 by default. Each is checked by the command line, in processes of 50 documents each
with a limit on their memory. It ends with exit code 1 when any document ends in a traceback, in an
exit code other than 0 to 3, runs longer than 5 s or takes the process beyond 500 MB.
"""

import json
import subprocess
import sys
import tempfile
from collections import Counter
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
sys.path[:0] = [str(ROOT), str(ROOT / "tests")]

from support.fuzzing import LONGEST_S, MOST_MB, Outcome  # noqa: E402 - after the path is set

BATCH = 50


def batch(first: int, count: int) -> list[Outcome]:
    """Check some documents in a process of their own."""
    with tempfile.TemporaryDirectory() as folder:
        command = [sys.executable, "-m", "support.fuzzing", folder, str(first), str(count)]
        path = f"{ROOT}:{ROOT / 'tests'}"
        done = subprocess.run(
            command,
            capture_output=True,
            text=True,
            timeout=60 + 2 * LONGEST_S * count,
            check=False,
            env={"PYTHONPATH": path, "PATH": "", "OPENBLAS_NUM_THREADS": "1"},
        )
    lines = [Outcome(*json.loads(line)) for line in done.stdout.splitlines()]
    if done.returncode or len(lines) != count:
        kind = f"process ended with {done.returncode} after {len(lines)} documents"
        lines.append(Outcome(first + len(lines), kind, -1, 0.0, 0.0, done.stderr[-2000:]))
    return lines


def main(count: int, first: int) -> int:
    """Check ``count`` documents, print the figures, and tell how many went wrong."""
    outcomes: list[Outcome] = []
    for start in range(first, first + count, BATCH):
        outcomes += batch(start, min(BATCH, first + count - start))
    print(f"documents        {count} (seeds {first} to {first + count - 1})")
    for kind, number in sorted(Counter(each.kind for each in outcomes).items()):
        of_kind = [each for each in outcomes if each.kind == kind]
        codes = Counter(each.code for each in of_kind)
        shown = ", ".join(f"{code}: {codes[code]}" for code in sorted(codes))
        longest = max(each.seconds for each in of_kind)
        print(f"  {kind:22} {number:5}  exit codes {shown}; longest {longest:.2f} s")
    print(f"longest          {max(each.seconds for each in outcomes):.2f} s (most {LONGEST_S:g})")
    print(f"memory           {max(each.megabytes for each in outcomes):.0f} MB (most {MOST_MB:g})")
    failed = [each for each in outcomes if each.wrong]
    print(f"went wrong       {len(failed)}")
    for each in failed:
        print(f"seed {each.seed}: {each.kind}: {each.wrong}")
    return len(failed)


if __name__ == "__main__":
    given = [int(word) for word in sys.argv[1:3]]
    sys.exit(1 if main(*[*given, *[2000, 0][len(given) :]]) else 0)
