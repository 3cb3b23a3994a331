"""Time whole `check` processes, one per sample, against one that only imports the libraries.

Run it as ``python tests/benchmarks/startup.py [REPETITIONS]``. All are run in turn, so that
whatever else the machine does falls on both; medians are compared. All find their bytecode
compiled, as an installed package has it; it is kept in a folder of its own. Below that stands
where the processor time of a check goes, stage by stage.
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
    run = "from enclosure_check.cli import run; run()"
    return [str(script)] if script.exists() else [sys.executable, "-c", run]


def settings(bytecode: str) -> dict[str, str]:
    """Give the environment of a process, its bytecode kept in a folder."""
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": bytecode}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)
    return environment


def timed(command: list[str], bytecode: str) -> tuple[float, float]:
    """Run a process; give its wall time and its processor time [s]."""
    environment = settings(bytecode)
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


def stages(document: Path, repetitions: int, bytecode: str) -> dict[str, float]:
    """Give the median processor time of every stage of a check [s], the interpreter first."""
    environment = {**settings(bytecode), "OPENBLAS_NUM_THREADS": "1"}
    command = [sys.executable, str(Path(__file__).with_name("stages.py")), str(document)]
    times: dict[str, list[float]] = {"interpreter": []}
    for _ in range(repetitions):
        times["interpreter"].append(timed([sys.executable, "-c", "pass"], bytecode)[1])
        ended = subprocess.run(
            command, cwd=ROOT, env=environment, capture_output=True, text=True, check=True
        )
        for line in ended.stdout.splitlines():
            name, _, seconds = line.partition("\t")
            times.setdefault(name, []).append(float(seconds))
    return {name: statistics.median(values) for name, values in times.items()}


def print_stages(table: dict[str, dict[str, float]]) -> None:
    """Print a table with a row per stage and a column per document."""
    print("\nProcessor time by stage [ms]:")
    print(" " * 28 + "".join(f"{name[:20]:>21s}" for name in table))
    for stage in next(iter(table.values())):
        row = "".join(f"{column[stage] * 1e3:21.1f}" for column in table.values())
        print(f"  {stage:26s}{row}")


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
        table = {path.stem: stages(path, LEAST_REPETITIONS, bytecode) for path in by_size()}
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
    print_stages(table)


if __name__ == "__main__":
    main()
