"""Time `check` with its sensitivities against without, as processes, for every sample.

Run it as ``python tests/benchmarks/sensitivities.py [REPETITIONS [N]]``: so many times, N
sensitivities. Both are run in turn, so that whatever else the machine does falls on both; medians
are compared, of the wall and of the processor time.
"""

import statistics
import sys
import tempfile

from samples import by_size
from startup import program, timed

REPETITIONS, SENSITIVITIES = 7, 5


def main() -> None:
    repetitions = int(sys.argv[1]) if len(sys.argv) > 1 else REPETITIONS
    count = sys.argv[2] if len(sys.argv) > 2 else str(SENSITIVITIES)
    print(f"{repetitions} repetitions in turn, medians; times the check without in brackets:")
    with tempfile.TemporaryDirectory() as bytecode:
        for path in by_size():
            plain = [*program(), "check", str(path)]
            commands = (plain, [*plain, "--sensitivities", count])
            for command in commands:  # once, to have the bytecode compiled
                timed(command, bytecode)
            times = [[timed(command, bytecode) for command in commands] for _ in range(repetitions)]
            (wall, used), (more_wall, more_used) = (
                [statistics.median(values) for values in zip(*runs, strict=True)]
                for runs in zip(*times, strict=True)
            )
            print(
                f"  {path.stem:22s} {wall * 1e3:6.1f} ms wall, {used * 1e3:6.1f} ms processor; "
                f"with {count}: {more_wall * 1e3:6.1f} ms wall ({more_wall / wall:.2f}), "
                f"{more_used * 1e3:6.1f} ms processor ({more_used / used:.2f})",
                flush=True,
            )


if __name__ == "__main__":
    main()
