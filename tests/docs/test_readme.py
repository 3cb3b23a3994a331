"""The README: commands as they are copied, outputs as they are printed, numbers as they come out."""

import re
import shlex

import pytest
from support import recorded_tables

from enclosure_check.check import check
from enclosure_check.cli import main
from enclosure_check.cli.codes import ExitCode
from enclosure_check.description.load import load_document
from enclosure_check.findings.results import CAUTION

SAMPLE = "sample_boards/wall_sensor_hub.yaml"
SETTING_UP = "python3 -m venv .venv && .venv/bin/pip install -q "
COMMANDS = (
    f"{SETTING_UP}. && .venv/bin/enclosure-check check {SAMPLE}",
    f'{SETTING_UP}-e ".[test]" && .venv/bin/python -m pytest -n auto',
)


@pytest.fixture(scope="module")
def readme(read_page):
    return read_page("README.md")


@pytest.fixture
def printed(root, monkeypatch, capsys):
    """What a command of the README prints, run at the root of the repository."""
    monkeypatch.chdir(root)
    for name in ("NO_COLOR", "FORCE_COLOR"):
        monkeypatch.delenv(name, raising=False)

    def run(command):
        program, *arguments = shlex.split(command)
        assert program.endswith("enclosure-check")
        code = main(arguments)
        return capsys.readouterr().out, code

    return run


def test_commands_stand_alone_on_one_line(readme):
    assert tuple(block.rstrip("\n") for block in readme.blocks("sh")) == COMMANDS


def test_the_gate_finds_its_command(root, readme):
    """As .ci/run looks for it: the first line of this form, wherever it stands."""
    pattern = re.search(r"grep -m1 -E '([^']+)'", (root / ".ci" / "run").read_text("utf-8"))
    found = next(line for line in readme.text.splitlines() if re.search(pattern[1], line))
    assert found == COMMANDS[1]


def test_program_of_the_command_is_what_the_project_installs(root):
    assert 'enclosure-check = "enclosure_check.cli:run"' in (root / "pyproject.toml").read_text(
        "utf-8"
    )


def test_output_is_what_the_command_prints(readme, printed):
    out, code = printed(COMMANDS[0].rpartition("&& ")[2])
    assert code == ExitCode.PASS
    head, section = readme.blocks("text")
    assert out.startswith(head), out[: len(head) + 200]
    assert "\n\n" + section + "\n" in out, out
    assert section.startswith("hot_corridor: ")
    assert "Heat out: " in section


def test_exit_codes(readme):
    told = {int(row[0]): row[1] for row in readme.table("exit code", "meaning")}
    assert set(told) == {int(code) for code in ExitCode}
    assert "--strict" in told[ExitCode.FAIL]


def test_options_of_the_command_exist(readme, capsys):
    assert main(["check", "--help"]) == 0
    told = capsys.readouterr().out
    for option in re.findall(r"`(--[a-z]+)", readme.prose()):
        assert option in told


def test_small_document_passes(readme, tmp_path):
    (block,) = readme.blocks("yaml")
    path = tmp_path / "small.yaml"
    path.write_text(block, encoding="utf-8")
    report = check(load_document(str(path)))
    assert report.verdict == "pass"
    assert [part.name for part in report.conditions[0].parts] == ["U1"]


# The failing sample -------------------------------------------------------------------------


@pytest.fixture(scope="module")
def battery():
    return recorded_tables.battery()


def test_table_of_options_is_current(readme, battery):
    conditions = list(dict.fromkeys(condition for _, condition in battery))
    assert readme.table("option", *conditions) == recorded_tables.options()


def test_the_sample_fails_for_the_reason_told(battery):
    noon, worst = battery[None, "noon_sun"]
    assert worst.verdict == "fail"
    assert worst.limit_side == "max"
    assert {part.name for part in noon.parts if part.verdict == "fail"} == {"BAT"}
    assert noon.heat_balance.sun_w > noon.heat_balance.generated_w
    (heat,) = (row for row in noon.part_heat if row.name == "BAT")
    assert heat.power_w == 0.0
    assert heat.to_air_w < 0.0  # takes up heat of the air,
    assert worst.local_air_c > noon.air.mean_c + 2  # which is warmest high in the box


def test_what_is_told_of_the_shade_roof(readme, battery):
    prose = " ".join(readme.text.split())
    assert "brings the battery below its limit" in prose
    assert battery[None, "noon_sun"][1].verdict == "fail"
    assert battery["shade_roof", "noon_sun"][1].verdict == "pass"
    # Dirt costs more than half of what the roof brings.
    bare, roofed, dirty = (
        battery[option, "noon_sun"][1].temperature_c for option in (None, "shade_roof", "aged_coat")
    )
    assert dirty - bare > 0.5 * (bare - roofed) > 0


# Vents --------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def processor():
    for condition, worst in recorded_tables.processor().values():
        assert worst.margin_k == min(part.margin_k for part in condition.parts)
    return recorded_tables.processor()


def test_table_of_vents_is_current(readme):
    assert readme.table("option", *recorded_tables.VENTED_CONDITIONS) == recorded_tables.vents()


def test_what_is_told_of_the_vents(readme, processor):
    def margin(option, condition="warm_riser"):
        return processor[option, condition][1].margin_k

    sealed, drawn, wanted = margin("sealed"), margin(None), 3.0
    assert drawn < wanted < margin("larger_vents")
    assert margin("lower_outlets") < drawn
    # The filter takes more than half of what the vents bring.
    assert sealed < margin("dust_filter") < 0.5 * (sealed + drawn)
    blocked = {each.name: each for each in processor[None, "vent_blocked"][0].openings.each}
    assert blocked["entries"].inflow_g_per_s > 0
    assert blocked["outlet"].inflow_g_per_s > 0
    assert blocked["outlet"].outflow_g_per_s > 0


# Accuracy and caution -----------------------------------------------------------------------


def test_accuracy_told_is_that_of_the_tables_of_the_method(readme, read_page):
    method = read_page("docs/method.md")
    prose = " ".join(readme.text.split())
    outside = [float(row[4]) for row in method.table("case", "width x depth x height mm")]
    assert f"the convection of {_word(len(outside))} whole boxes" in prose
    assert -5 <= min(outside) < -4 < 6 < max(outside) <= 7
    assert "within -5 to +7 %" in prose
    inside = [float(row[3]) for row in method.table("case", "inside mm, board")]
    assert f"the walls of {_word(len(inside))} sealed boxes" in prose
    assert "is met within -5 to +6 %" in prose
    assert (min(inside), max(inside)) == (-5, 6)


def _word(number):
    return ("none", "one", "two", "three", "four", "five", "six")[number]


def test_caution_names_what_the_report_names(readme):
    caution = " ".join(readme.text.partition("## Caution")[2].partition("\n## ")[0].split())
    for words in (
        "touch temperature, batteries, fire",
        "local codes and licensed practice decide",
        "standard",
    ):
        assert words in caution
        assert words in CAUTION
    assert "never replaces a test" in caution
