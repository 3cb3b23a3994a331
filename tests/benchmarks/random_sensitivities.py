"""Compare the first sensitivities with those found with nothing left out, over random documents.

Run it as ``python tests/benchmarks/random_sensitivities.py [COUNT [FIRST]]``: so many documents
from a seed on, and the samples. Of each the first five and the first ten of either kind are asked
for, and held against the same of all. Prints those that miss any.
"""

import random
import sys
import tempfile
from collections.abc import Iterator
from pathlib import Path

import yaml

sys.path.insert(0, str(Path(__file__).parent.parent))

from samples import by_size
from support.random_documents import random_document

from enclosure_check.check import NotConvergedError, check
from enclosure_check.description.load import LoadedDocument, load_document
from enclosure_check.description.problems import DocumentError
from enclosure_check.findings.certainty import Sensitivity
from enclosure_check.workers import available_processes

COUNT, ASKED, ALL = 40, (5, 10), 1000


def documents(count: int, first: int) -> Iterator[tuple[str, LoadedDocument]]:
    """Give the samples, and random documents in which every part has a limit."""
    for path in by_size():
        yield path.stem, load_document(str(path))
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "box.yaml"
        for seed in range(first, first + count):
            document = random_document(random.Random(seed))
            for part in document.get("parts", {}).values():
                part.setdefault("limits", {"case": {"max_c": 90}})
            path.write_text(yaml.safe_dump(document, sort_keys=False), "utf-8")
            try:
                yield f"seed {seed}", load_document(str(path))
            except DocumentError:
                print(f"seed {seed}: refused")


def found(document: LoadedDocument, most: int) -> tuple[Sensitivity, ...]:
    """Give the first sensitivities of a document; none without a part that has a limit."""
    report = check(document, sensitivities=most, processes=available_processes())
    return () if report.sensitivities is None else report.sensitivities.numbers


def main() -> None:
    count = int(sys.argv[1]) if len(sys.argv) > 1 else COUNT
    first = int(sys.argv[2]) if len(sys.argv) > 2 else 0
    compared, missed = 0, 0
    for name, document in documents(count, first):
        try:
            every = found(document, ALL)
        except NotConvergedError as error:
            print(f"{name}: {error}")
            continue
        for most in ASKED:
            kinds = ([row for row in every if row.installation is kind] for kind in (False, True))
            right = [row for rows in kinds for row in rows[:most]]
            given = found(document, most)
            compared += 1
            if list(given) != right:
                missed += 1
                left_out = [row.path for row in right if row not in given]
                print(f"{name}: of the first {most} {left_out} are missing")
    print(f"{compared} lists compared, {missed} miss a number")


if __name__ == "__main__":
    main()
