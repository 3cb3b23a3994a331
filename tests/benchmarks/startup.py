"""Time whole `check` processes, one per sample, against one that only imports the libraries.

Run it as ``python tests/benchmarks/startup.py [REPETITIONS]``. All are run in turn, so that
whatever else the machine does falls on both; medians are compared. All find their bytecode
compiled, as an installed package has it; it is kept in a folder of its own.
"""

import os
import resource
import statistics
import subprocess
import sys
import tempfile
import time
from pathlib import Path

from samples import by_size

LEAST_REPETITIONS = 11
BARE = "import numpy, pydantic, yaml, rich.console"
ROOT = Path(__file__).parent.parent.parent


def program() -> list[str]:
    """Give the command as it was installed, or what an installed one runs."""
    script = Path(sys.executable).with_name("enclosure-check")
    run = "import sys; from enclosure_check.cli import main; sys.exit(main())"
    return [str(script)] if script.exists() else [sys.executable, "-c", run]


def timed(command: list[str], bytecode: str) -> tuple[float, float]:
    """Run a process; give its wall time and its processor time [s]."""
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": bytecode}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    start = time.perf_counter()
    ended = subprocess.run(
        command, cwd=ROOT, env=environment, stdout=subprocess.DEVNULL, check=False
    )
    wall = time.perf_counter() - start
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    if ended.returncode not in (0, 1):
        raise SystemExit(f"{command} ended with {ended.returncode}")
    return wall, after.ru_utime - before.ru_utime + after.ru_stime - before.ru_stime


def main() -> None:
    repetitions = int(sys.argv[1]) if len(sys.argv) > 1 else 2 * LEAST_REPETITIONS + 1
    repetitions = max(repetitions, LEAST_REPETITIONS)
    commands = {"bare imports": [sys.executable, "-c", BARE]}
    commands |= {path.stem: [*program(), "check", str(path)] for path in by_size()}
    times: dict[str, list[tuple[float, float]]] = {name: [] for name in commands}
    with tempfile.TemporaryDirectory() as bytecode:
        for command in commands.values():
            timed(command, bytecode)
        for _ in range(repetitions):
            for name, command in commands.items():
                times[name].append(timed(command, bytecode))
    print(f"{repetitions} repetitions in turn, medians; times the bare imports in brackets:")
    medians = {
        name: [statistics.median(values) for values in zip(*pairs, strict=True)]
        for name, pairs in times.items()
    }
    bare = medians["bare imports"]
    for name, (wall, used) in medians.items():
        print(
            f"  {name:20s} {wall * 1e3:6.1f} ms wall ({wall / bare[0]:.2f}), "
            f"{used * 1e3:6.1f} ms processor ({used / bare[1]:.2f})"
        )


if __name__ == "__main__":
    main()
