"""Documents and part lists that a stranger might send, and how the program takes them.

Import it as ``from support.fuzzing import fuzzed, checked`` (``tests`` is on the path). A seed always
gives the same document. Run as a module it checks documents one after the other and prints a line of
JSON for each: ``python -m support.fuzzing FOLDER FIRST_SEED COUNT``.
"""

import contextlib
import copy
import io
import json
import random
import re
import resource
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any, NamedTuple

import yaml
from support.mutations import DUMPER, FULL, raw
from support.part_lists import DOCUMENT as LISTED
from support.part_lists import PLACE, POWER
from support.random_documents import random_document

from enclosure_check.cli import main
from enclosure_check.description.yaml_nodes import read_yaml

LONGEST_S = 5.0
MOST_MB = 500.0
SAMPLES = sorted((Path(__file__).parents[2] / "sample_boards").glob("*.yaml"))
# Put where a value or a piece of text stood.
ODD_VALUES: tuple[Any, ...] = (
    None, True, False, 0, -1, 1e-300, 1e300, -1e300, 1e999, float("nan"), 10**30, "", " ", "\u202e", "nan",
    "=1+1", "{{7*7}}", "${HOME}", "<script>alert(1)</script>", "`id`", "$(id)", "../../etc/passwd",
    "/dev/zero", "\\\\server\\share", "a" * 81, "a" * 5000, "1" * 5000, "x\ny", "[red]", "%s%n", [], {},
    [[]], {"a": {}}, list(range(300)), "left", "air", "main", 90, 0.5, "ﷺ" * 20, "e\u0301" * 30,
)  # fmt: skip
ODD_TEXTS = (
    "\x00", "\x1b[2J", "\u2028", "\ufeff", "&a ", "*a ", "!!python/object/apply:os.system ", "<<: *a", "---\n",
    "...\n", "? ", "- ", "[", "]", "{", "}", ": ", "#", "'", '"', "|\n", ">\n", "%YAML 1.1\n", "\t", "\r", ",",
    ";", '""', '"a"b', "1e", ".inf", "~", "0x", "_", "9" * 50, "\\", "@", "`",
)  # fmt: skip


class Fuzzed(NamedTuple):
    """A document, the files beside it, and how it came about."""

    kind: str
    document: bytes
    files: dict[str, bytes]


class Outcome(NamedTuple):
    """How a document was taken.

    What it was, exit code, processor time, memory of the process so far, and what went wrong; empty
    where nothing did.
    """

    seed: int
    kind: str
    code: int
    seconds: float
    megabytes: float
    wrong: str


def faults(code: int, said: str, seconds: float, megabytes: float) -> list[str]:
    """Say in which ways a document was not taken as any document must be."""
    checks = {
        f"exit code {code}": code not in (0, 1, 2, 3),
        "a traceback": "Traceback" in said,
        "no reason given, or one without need": (code in (2, 3)) is not bool(said.strip()),
        "control characters": re.search(r"[\x00-\x08\x0b-\x1f\x7f-\x9f]", said) is not None,
        f"{seconds:.2f} s": seconds > LONGEST_S,
        f"{megabytes:.0f} MB": megabytes > MOST_MB,
    }
    return [fault for fault, found in checks.items() if found]


# Making documents -------------------------------------------------------------------------


class _Chance(random.Random):
    """Chance, and whether the document that uses every model is among those changed."""

    full = True


def fuzzed(seed: int, *, full: bool = True) -> Fuzzed:
    """Make the document of a seed.

    ``full`` tells whether it may come from the document that uses every model. Its power doubles
    with temperature, and how far it may rise is searched for long where there is no steady state.
    """
    rng = _Chance(seed)
    rng.full = full
    return rng.choice(_KINDS)(rng)


def _values(rng: _Chance) -> Fuzzed:
    """A document with some values replaced, moved or taken away."""
    data, files = _start(rng)
    for _ in range(rng.choice([1, 1, 1, 2, 5])):
        _change(rng, data)
    return Fuzzed("values", _dump(data), files)


def _texts(rng: _Chance) -> Fuzzed:
    """A document's text with pieces put in, taken out, doubled or swapped."""
    data, files = _start(rng)
    return Fuzzed("text", _garbled(rng, _dump(data)), files)


def _lists(rng: _Chance) -> Fuzzed:
    """Part lists with pieces put in, taken out, doubled or swapped."""
    files = {"place.csv": PLACE.encode(), "power.csv": POWER.encode()}
    name = rng.choice(list(files))
    files[name] = _garbled(rng, files[name] * rng.choice([1, 1, 1, 50]))
    return Fuzzed("part lists", LISTED.encode(), files)


def _described(rng: _Chance) -> Fuzzed:
    """Part lists described wrongly."""
    data = yaml.safe_load(LISTED)
    for _ in range(rng.choice([1, 1, 2])):
        _change(rng, data["part_lists"])
    return Fuzzed("lists described", _dump(data), _files())


def _patched(rng: _Chance) -> Fuzzed:
    """Many conditions and options out of pieces of the document."""
    data, files = _start(rng)
    for key in ("options", "conditions"):
        data[key] = {f"{key} {i}": _patch(rng, data) for i in range(rng.choice([1, 3, 14, 30]))}
    return Fuzzed("patches", _dump(data), files)


def _many(rng: _Chance) -> Fuzzed:
    """A document with very many of one thing."""
    data, files = _start(rng)
    sections = [(data, key) for key in data if isinstance(data[key], dict) and data[key]]
    sections += [
        (board, key)
        for board in (data.get("boards") or {}).values()
        if isinstance(board, dict)
        for key in board
        if isinstance(board[key], dict) and board[key]
    ]
    owner, key = rng.choice(sections)
    first = rng.choice(list(owner[key].values()))
    owner[key] = {f"n{i}": copy.deepcopy(first) for i in range(rng.choice([30, 300, 3000]))}
    return Fuzzed("many", _dump(data), files)


def _random_valid(rng: _Chance) -> Fuzzed:
    """A valid document."""
    return Fuzzed("valid", _dump(random_document(rng)), {})


def _noise(rng: _Chance) -> Fuzzed:
    """Bytes of chance, or a document with bytes of chance in it."""
    data = bytearray(rng.choice(SAMPLES).read_bytes())
    if rng.random() < 0.3:
        return Fuzzed("bytes", rng.randbytes(rng.choice([0, 1, 50, 5000])), {})
    for _ in range(rng.choice([1, 3, 30])):
        data[rng.randrange(len(data))] = rng.randrange(256)
    return Fuzzed("bytes", bytes(data), {})


_KINDS: tuple[Callable[[_Chance], Fuzzed], ...] = (
    _values, _values, _texts, _texts, _lists, _lists, _described, _patched, _many, _random_valid, _noise,
)  # fmt: skip


def _start(rng: _Chance) -> tuple[dict[str, Any], dict[str, bytes]]:
    """Give a valid document to change, as plain data, and the files it needs."""
    choice = rng.randrange(5)
    if choice == 0:
        return random_document(rng), {}
    if choice == 1:
        return yaml.safe_load(LISTED), _files()
    path = FULL if choice == 2 and rng.full else rng.choice(SAMPLES)
    data: dict[str, Any] = raw(read_yaml(path.read_bytes(), path.name))
    folder = path.with_suffix("")
    files = {f"{folder.name}/{each.name}": each.read_bytes() for each in folder.glob("*.csv")}
    return data, files


def _files() -> dict[str, bytes]:
    return {"place.csv": PLACE.encode(), "power.csv": POWER.encode()}


def _dump(data: Any) -> bytes:
    return yaml.dump(data, Dumper=DUMPER, sort_keys=False, allow_unicode=True).encode("utf-8")


def _places(data: Any) -> list[tuple[Any, Any]]:
    """Give every mapping or list of some data with each of its keys."""
    found = []
    if isinstance(data, dict | list):
        for key in list(data) if isinstance(data, dict) else range(len(data)):
            found.append((data, key))
            found += _places(data[key])
    return found


def _change(rng: _Chance, data: Any) -> None:
    places = _places(data)
    if not places:
        return
    owner, key = rng.choice(places)
    act = rng.randrange(6)
    if act == 0:
        owner[key] = copy.deepcopy(rng.choice(ODD_VALUES))
    elif act == 1 and isinstance(owner[key], int | float):
        owner[key] = owner[key] * rng.choice([-1, 0, 0.01, 0.5, 2, 100, 1e9])
    elif act == 2 and isinstance(owner, dict):
        del owner[key]
    elif act == 3 and isinstance(owner, dict):
        owner[str(rng.choice(ODD_VALUES))] = owner.pop(key)
    elif act == 4:
        other, there = rng.choice(places)
        owner[key] = copy.deepcopy(other[there])
    else:
        owner[key] = rng.choice([rng.uniform(-1000, 1000), rng.randrange(1000), f"n{rng.random()}"])


def _patch(rng: _Chance, data: Any) -> Any:
    """A piece of the document as a patch, changed a little."""
    piece = {key: copy.deepcopy(data[key]) for key in data if key not in ("options", "conditions")}
    kept = rng.sample(list(piece), min(len(piece), rng.choice([1, 2])))
    patch = {key: piece[key] for key in kept}
    if rng.random() < 0.3:
        _change(rng, patch)
    return patch


def _garbled(rng: _Chance, data: bytes) -> bytes:
    text = data.decode()
    for _ in range(rng.choice([1, 1, 2, 5, 20])):
        at, to = sorted(rng.randrange(len(text) + 1) for _ in range(2))
        to = min(to, at + rng.choice([1, 5, 200]))
        act = rng.randrange(5)
        if act == 0:
            text = text[:at] + text[to:]
        elif act == 1:
            text = text[:to] + text[at:to] * rng.choice([1, 3, 100]) + text[to:]
        elif act == 2:
            text = text[:at] + rng.choice(ODD_TEXTS) * rng.choice([1, 1, 1, 1000]) + text[at:]
        elif act == 3:
            text = text[:at] + str(rng.choice(ODD_VALUES)) + text[to:]
        else:
            text = (
                text[:at]
                + chr(rng.choice([rng.randrange(1, 0x250), rng.randrange(0xE000, 0x11000)]))
                + text[at:]
            )
        text = text[: 1 << 20] or " "
    return text.encode("utf-8", "surrogatepass")


# Checking them ----------------------------------------------------------------------------


def checked(seed: int, folder: Path, *, full: bool = True) -> Outcome:
    """Write a document with its files into a folder and check it, as the command line would."""
    made = fuzzed(seed, full=full)
    (folder / "box.yaml").write_bytes(made.document)
    for name, data in made.files.items():
        (folder / name).parent.mkdir(exist_ok=True)
        (folder / name).write_bytes(data)
    out, err = io.StringIO(), io.StringIO()
    rng = random.Random(seed)
    arguments = ["check", str(folder / "box.yaml"), "--format", rng.choice(["text", "json"])]
    start = time.process_time()
    with contextlib.redirect_stdout(out), contextlib.redirect_stderr(err):
        code = main(arguments)
    seconds = time.process_time() - start
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    megabytes = peak / (1 << 20 if sys.platform == "darwin" else 1 << 10)
    found = faults(code, err.getvalue(), seconds, megabytes)
    wrong = f"{', '.join(found)}: {err.getvalue()[-1500:]}" if found else ""
    return Outcome(seed, made.kind, code, seconds, megabytes, wrong)


def _run(folder: Path, first: int, count: int) -> None:
    for seed in range(first, first + count):
        inside = folder / str(seed)
        inside.mkdir()
        print(json.dumps(checked(seed, inside)), flush=True)


if __name__ == "__main__":
    _run(Path(sys.argv[1]), int(sys.argv[2]), int(sys.argv[3]))
