"""Data flows one way: who may import whom, who prints, and what importing must not do."""

import ast
import json
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path
from typing import NamedTuple

import pytest

ROOT = Path(__file__).parents[1]
PACKAGE = ROOT / "enclosure_check"
FILES = sorted(PACKAGE.rglob("*.py"))

# What each room may import of ours, beside itself.
ROOMS = {
    "physics": set(),
    "library": set(),
    "description": {"library"},
    "network": {"description", "physics"},
    "solve": {"network"},
    "findings": {"description", "physics", "network", "solve"},
    "report": {"findings"},
    "cli": {"check", "description", "findings", "report", "workers"},
}
# The files outside the rooms; `__init__` holds the version, which anybody may show, and `records`
# the data classes, which anybody may make.
ANYBODY = {"__version__", "records"}
TOP = {
    "__init__": set(),
    "records": set(),
    "workers": set(),
    "check": {*ROOMS, "workers"} - {"report", "cli"},
    "__main__": {"cli"},
}
# Slow to import, and needed by few: inside a function or not at all.
LAZY = ("scipy", "rich", "matplotlib", "pandas")
# Where the library of the models may be imported at the top: a check runs without the models.
MODELS = ("pydantic", "pydantic_core")
OF_MODELS = "description"
MOST_LINES = 450
# Programs that write a page of the documentation or a table; they print when run, as their last line.
PAGES = ("description/page.py", "description/quick_page.py", "library/page.py")


class Import(NamedTuple):
    module: str
    line: int
    at_top: bool


def imports(tree: ast.AST) -> Iterator[Import]:
    """Give every import of a file, those within functions too."""
    inner = {
        id(node)
        for function in ast.walk(tree)
        if isinstance(function, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda)
        for node in ast.walk(function)
    }
    for node in ast.walk(tree):
        at_top = id(node) not in inner
        if isinstance(node, ast.Import):
            for name in node.names:
                yield Import(name.name, node.lineno, at_top)
        elif isinstance(node, ast.ImportFrom):
            module = node.module or ""
            if node.level:
                # Relative imports hide where they lead.
                yield Import(f"enclosure_check.relative.{module}", node.lineno, at_top)
            elif module == "enclosure_check":
                for name in node.names:
                    yield Import(f"{module}.{name.name}", node.lineno, at_top)
            else:
                yield Import(module, node.lineno, at_top)


def room_of(path: Path) -> str:
    """The room of a file, or its own name outside the rooms."""
    inside = path.relative_to(PACKAGE)
    return inside.parts[0] if len(inside.parts) > 1 else inside.stem


def wrong_imports(room: str, tree: ast.AST) -> list[str]:
    """Give what a file of a room imports and must not."""
    allowed = {**ROOMS, **TOP}[room] | {room} | ANYBODY
    wrong = []
    for each in imports(tree):
        head, _, rest = each.module.partition(".")
        if head in LAZY and each.at_top:
            wrong.append(f"line {each.line}: {each.module} at the top of a module")
        if head in MODELS and each.at_top and room != OF_MODELS:
            wrong.append(f"line {each.line}: {each.module} at the top, outside the models")
        if head == "enclosure_check" and rest.partition(".")[0] not in allowed:
            wrong.append(f"line {each.line}: {each.module}")
    return wrong


def prints(tree: ast.AST) -> list[int]:
    """Give the lines that print or reach for the standard streams, but for a page's last line."""
    skipped: set[int] = set()
    for node in getattr(tree, "body", []):
        if isinstance(node, ast.If) and ast.unparse(node.test) == "__name__ == '__main__'":
            skipped |= {id(inner) for inner in ast.walk(node)}
    lines = []
    for node in ast.walk(tree):
        if id(node) in skipped:
            continue
        called = isinstance(node, ast.Call) and ast.unparse(node.func) in ("print", "input")
        stream = isinstance(node, ast.Attribute) and ast.unparse(node) in (
            "sys.stdout",
            "sys.stderr",
            "sys.stdin",
        )
        if called or stream:
            lines.append(node.lineno)
    return lines


def parsed(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"))


def named(path: Path) -> str:
    return str(path.relative_to(PACKAGE))


# The code -----------------------------------------------------------------------------------


def test_every_room_is_known():
    rooms = {path.name for path in PACKAGE.iterdir() if path.is_dir() and path.name[0] != "_"}
    assert rooms == set(ROOMS)
    assert {path.stem for path in PACKAGE.glob("*.py")} == set(TOP)


@pytest.mark.parametrize("path", FILES, ids=named)
def test_imports_go_one_way(path):
    assert wrong_imports(room_of(path), parsed(path)) == []


@pytest.mark.parametrize("path", FILES, ids=named)
def test_only_the_command_line_prints(path):
    if path == PACKAGE / "cli" / "output.py":
        assert prints(parsed(path)) != []
    else:
        assert prints(parsed(path)) == []


def test_only_pages_run_as_programs():
    programs = [named(path) for path in FILES if "__name__ ==" in path.read_text(encoding="utf-8")]
    assert sorted(programs) == sorted(PAGES)


def test_zero_celsius_is_in_one_place():
    found = [named(path) for path in FILES if "273.15" in path.read_text(encoding="utf-8")]
    assert found == ["network/units.py"]


@pytest.mark.parametrize("folder", ["enclosure_check", "tests"])
def test_files_can_be_held_in_mind(folder):
    lengths = {
        str(path.relative_to(ROOT)): len(path.read_text(encoding="utf-8").splitlines())
        for path in (ROOT / folder).rglob("*.py")
    }
    assert lengths
    assert {name: count for name, count in lengths.items() if count > MOST_LINES} == {}


# The tests of the tests ---------------------------------------------------------------------


@pytest.mark.parametrize(
    ("room", "source", "wrong"),
    [
        ("physics", "from enclosure_check.network.links import X", True),
        ("physics", "def f():\n    from enclosure_check.solve.steady import X", True),
        ("physics", "from enclosure_check import library", True),
        ("physics", "import enclosure_check.findings.heat", True),
        ("physics", "from enclosure_check.physics.air import air", False),
        ("physics", "from . import air", True),
        ("physics", "from enclosure_check.records import dataclass", False),
        ("records", "from enclosure_check.physics.air import air", True),
        ("solve", "from enclosure_check.physics.air import air", True),
        ("solve", "from enclosure_check.network.network import X", False),
        ("report", "from enclosure_check.network.network import X", True),
        ("report", "from enclosure_check.findings.results import X", False),
        ("library", "from enclosure_check.description.base import X", True),
        ("description", "from enclosure_check.library.rows import X", False),
        ("description", "from enclosure_check.physics.air import X", True),
        ("findings", "from enclosure_check.report.text import X", True),
        ("check", "from enclosure_check.cli import main", True),
        ("cli", "from enclosure_check.check import check", False),
        ("physics", "import scipy.special", True),
        ("physics", "def f():\n    import scipy.special", False),
        ("report", "from rich.table import Table", True),
        ("findings", "from pydantic import Field", True),
        ("findings", "def f():\n    from pydantic import Field", False),
        ("description", "from pydantic import Field", False),
        ("cli", "from enclosure_check import __version__", False),
        ("cli", "from enclosure_check.network.links import X", True),
        ("report", "from enclosure_check.cli.output import X", True),
    ],
)
def test_a_wrong_import_is_seen(room, source, wrong):
    assert bool(wrong_imports(room, ast.parse(source))) is wrong


@pytest.mark.parametrize(
    ("source", "lines"),
    [
        ("def f():\n    print('x')", [2]),
        ("import sys\nsys.stderr.write('x')", [2]),
        ("import sys\nif __name__ == '__main__':\n    sys.stdout.write('x')", []),
        ("blueprint(1)", []),
    ],
)
def test_printing_is_seen(source, lines):
    assert prints(ast.parse(source)) == lines


# Importing ----------------------------------------------------------------------------------

PROBE = """
import decimal, json, locale, logging, os, random, signal, sys, threading, warnings
import numpy, pydantic, yaml

def state():
    return {
        "warnings": [str(each) for each in warnings.filters],
        "numpy errors": str(numpy.geterr()),
        "numpy printing": str(numpy.get_printoptions()),
        "numpy random": str(numpy.random.get_state()[1][:4]),
        "random": str(random.getstate()[1][:4]),
        "decimal": str(decimal.getcontext()),
        "locale": str(locale.setlocale(locale.LC_ALL)),
        "environment": sorted(os.environ.items()),
        "folder": os.getcwd(),
        "logging": [str(each) for each in logging.root.handlers] + [logging.root.level],
        "recursion": sys.getrecursionlimit(),
        "hooks": [str(sys.excepthook), str(sys.displayhook)],
        "streams": [id(sys.stdout), id(sys.stderr)],
        "signals": str([signal.getsignal(each) for each in (signal.SIGINT, signal.SIGTERM)]),
        "threads": threading.active_count(),
        "yaml": str(sorted(map(str, yaml.SafeLoader.yaml_constructors)))
        + str(sorted(map(str, yaml.SafeLoader.yaml_implicit_resolvers))),
        "path": list(sys.path),
    }

before = state()
import {module}
after = state()
changed = [key for key in before if before[key] != after[key]]
print(json.dumps({{"changed": changed, "modules": sorted(sys.modules)}}))
"""


def imported(module: str) -> dict[str, list[str]]:
    code = PROBE.replace("{module}", module).replace("{{", "{").replace("}}", "}")
    done = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        timeout=60,
        cwd=ROOT,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    # Nothing but the probe's own line, and no warning either.
    assert done.stderr == ""
    (line,) = done.stdout.splitlines()
    found: dict[str, list[str]] = json.loads(line)
    return found


def modules() -> list[str]:
    found = [
        ".".join(path.relative_to(ROOT).with_suffix("").parts)
        for path in FILES
        if path.stem not in ("__init__", "__main__")
    ]
    assert "enclosure_check.cli.output" in found
    assert len(found) > 40
    return found


def test_importing_changes_no_global_state_and_loads_nothing_slow():
    found = imported(", ".join(modules()))
    assert found["changed"] == []
    loaded = {name.partition(".")[0] for name in found["modules"]}
    assert loaded.isdisjoint(LAZY)
    assert "enclosure_check" in loaded


def test_a_change_of_global_state_is_seen(tmp_path, monkeypatch):
    (tmp_path / "meddler.py").write_text("import numpy\nnumpy.set_printoptions(precision=3)\n")
    monkeypatch.setenv("PYTHONPATH", str(tmp_path))
    assert imported("meddler")["changed"] == ["numpy printing"]


def test_physics_stands_alone():
    rooms = {
        name.split(".")[1]
        for name in imported("enclosure_check.physics.box")["modules"]
        if name.startswith("enclosure_check.")
    }
    assert rooms == {"physics", "records"}
