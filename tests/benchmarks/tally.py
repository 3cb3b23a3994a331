"""How the solver fared over many documents, and the sum of several runs.

Run it as ``python tests/benchmarks/tally.py LOG...`` on what `random_documents.py` or
`random_vented.py` printed, to add their runs up.
"""

import json
import sys
from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path

# Begins the line of a log that holds its tally.
MARK = "tally "


@dataclass
class Tally:
    """What became of some documents; all numbers are counts but where told."""

    steps: Counter[int] = field(default_factory=Counter)
    """How many documents took so many Newton steps."""
    fallbacks: Counter[int] = field(default_factory=Counter)
    """How many had so many steps taken back."""
    unknowns: Counter[int] = field(default_factory=Counter)
    """How many had so many unknowns, to the nearest ten."""
    worst_share: float = 0.0
    """Worst imbalance over the heat that flows [-]."""
    processor_s: float = 0.0
    failed: list[str] = field(default_factory=list)
    """What became of each that did not converge."""

    @property
    def documents(self) -> int:
        """How many were tried."""
        return self.steps.total() + len(self.failed)

    def line(self) -> str:
        """Give it as one line of a log, which `tallied` reads."""
        counted = {
            name: sorted(getattr(self, name).items()) for name in ("steps", "fallbacks", "unknowns")
        }
        return MARK + json.dumps(vars(self) | counted)

    def text(self) -> str:
        """Give its figures in words."""
        rows = [("documents", str(self.documents)), ("not converged", str(len(self.failed)))]
        if self.steps:
            mid, high = quantile(self.steps, 0.5), quantile(self.steps, 0.99)
            long = sum(count for steps, count in self.steps.items() if steps > 100)
            taken_back = sum(steps * count for steps, count in self.fallbacks.items())
            rows += [
                ("unknowns", f"median {quantile(self.unknowns, 0.5)}, most {max(self.unknowns)}"),
                (
                    "Newton steps",
                    f"median {mid}, 99 % {high}, most {max(self.steps)}, over 100 in {long}",
                ),
                ("steps taken back", f"{taken_back} in all, most {max(self.fallbacks)}"),
                ("worst imbalance", f"{self.worst_share:.2e} of the heat that flows"),
            ]
        each = 1e3 * self.processor_s / max(self.documents, 1)
        rows.append(("solving", f"{each:.2f} ms of processor time each"))
        return "\n".join([f"{name:24}{value}" for name, value in rows] + self.failed)


def quantile(counts: Counter[int], share: float) -> int:
    """Give the least number that a share of all counted do not exceed."""
    left = share * counts.total()
    for number in sorted(counts):
        left -= counts[number]
        if left <= 0:
            return number
    raise ValueError("nothing was counted")


def tallied(lines: Iterable[str]) -> Tally:
    """Add up the tallies among the lines of some logs."""
    total = Tally()
    for line in lines:
        if not line.startswith(MARK):
            continue
        read = json.loads(line.removeprefix(MARK))
        for name in ("steps", "fallbacks", "unknowns"):
            getattr(total, name).update(dict(read[name]))
        total.worst_share = max(total.worst_share, read["worst_share"])
        total.processor_s += read["processor_s"]
        total.failed += read["failed"]
    return total


if __name__ == "__main__":
    logs = [Path(name).read_text(encoding="utf-8") for name in sys.argv[1:]]
    print(tallied(line for log in logs for line in log.splitlines()).text())
