"""A process of its own ends at once, with everything written, unless somebody watches it."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

from enclosure_check import cli

ROOT = Path(__file__).parents[2]
SAMPLE = ROOT / "sample_boards" / "wall_sensor_hub.yaml"
# A message as Python takes its modules down, which it does not do when left at once.
LATE = "import atexit; atexit.register(print, 'taken down')\n"


def ended(
    *flags: str, arguments: tuple[str, ...] = ("check", str(SAMPLE)), before: str = ""
) -> subprocess.CompletedProcess[str]:
    program = f"{LATE}{before}\nfrom enclosure_check.cli import run\nrun()"
    environment = {key: value for key, value in os.environ.items() if key != "PYTHONWARNINGS"}
    return subprocess.run(
        [sys.executable, *flags, "-c", program, *arguments],
        cwd=ROOT,
        env={**environment, "OPENBLAS_NUM_THREADS": "1"},
        capture_output=True,
        text=True,
        check=False,
        timeout=60,
    )


def test_all_is_written_before_it_ends():
    quick, slow = ended(), ended("-W", "error")
    assert quick.stdout + "taken down\n" == slow.stdout
    assert quick.returncode == slow.returncode == 0
    assert quick.stderr == slow.stderr == ""
    assert len(quick.stdout) > 5000


@pytest.mark.parametrize(
    ("arguments", "code"),
    [(("check", "nowhere.yaml"), 2), (("nonsense",), 2), (("--help",), 0), (("--version",), 0)],
)
def test_other_ends(arguments, code):
    done = ended(arguments=arguments)
    assert done.returncode == code
    assert "taken down" not in done.stdout
    assert done.stdout or done.stderr


@pytest.mark.parametrize(
    "watching",
    ["import sys; sys.settrace(lambda *_: None)", "import cProfile; cProfile.Profile().enable()"],
)
def test_who_watches_sees_the_end(watching):
    done = ended(arguments=("--version",), before=watching)
    assert done.returncode == 0
    assert done.stdout.endswith("taken down\n")


def test_what_cannot_be_flushed_is_left_to_python(monkeypatch):
    class Full:
        def flush(self) -> None:
            raise OSError(28, "No space left on device")

    monkeypatch.setattr(sys, "warnoptions", [])
    monkeypatch.setattr(sys, "gettrace", lambda: None)
    monkeypatch.setattr(sys, "getprofile", lambda: None)
    assert cli._may_leave_at_once()
    monkeypatch.setattr(sys, "stdout", Full())
    assert not cli._may_leave_at_once()
    monkeypatch.setattr(sys, "stdout", None)
    assert cli._may_leave_at_once()
