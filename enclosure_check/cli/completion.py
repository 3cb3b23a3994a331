"""Completion scripts for shells, written from the parser of the command line itself."""

import argparse
from collections.abc import Callable, Iterator
from typing import NamedTuple

# What a value's name in the help says of it: a path is completed, any other value is not.
_PATHS = ("FILE", "PATH", "FOLDER", "DIR")


class Option(NamedTuple):
    """An option, or a value without one (no names)."""

    names: tuple[str, ...]
    about: str
    takes: bool
    """Whether a value follows."""
    words: tuple[str, ...]
    """Values allowed; none where they are free."""
    is_path: bool


class Command(NamedTuple):
    """A command with its options and values."""

    name: str
    about: str
    options: tuple[Option, ...]
    values: tuple[Option, ...]


def commands_of(parser: argparse.ArgumentParser) -> tuple[Command, ...]:
    """Read the commands off a parser; the first, without a name, is the program itself."""
    top = _command("", "", parser)
    found = [top]
    for action in _actions(parser):
        if isinstance(action, argparse._SubParsersAction):
            abouts: dict[str, str] = {
                each.dest: each.help or "" for each in action._choices_actions
            }
            for name, inner in action.choices.items():
                found.append(_command(name, abouts.get(name, ""), inner))
    return tuple(found)


def _actions(parser: argparse.ArgumentParser) -> Iterator[argparse.Action]:
    yield from parser._actions


def _command(name: str, about: str, parser: argparse.ArgumentParser) -> Command:
    options: list[Option] = []
    values: list[Option] = []
    for action in _actions(parser):
        if isinstance(action, argparse._SubParsersAction):
            continue
        metavar = action.metavar if isinstance(action.metavar, str) else ""
        found = Option(
            tuple(action.option_strings),
            " ".join((action.help or "").replace("%(default)s", str(action.default)).split()),
            action.nargs != 0,
            tuple(map(str, action.choices or ())),
            metavar in _PATHS,
        )
        (options if found.names else values).append(found)
    return Command(name, about, tuple(options), tuple(values))


# bash -------------------------------------------------------------------------------------

_BASH = """\
# Completion of {program} for bash. Load it with
#   source <({program} completion bash)
_{function}() {{
    local cur=${{COMP_WORDS[COMP_CWORD]}} prev=${{COMP_WORDS[COMP_CWORD-1]}} command= words= at
    # Bash takes "--option=value" apart.
    if [[ $cur == "=" ]]; then
        cur=
    elif [[ $prev == "=" ]]; then
        prev=${{COMP_WORDS[COMP_CWORD-2]}}
    fi
    for ((at = 1; at < COMP_CWORD; at++)); do
        case ${{COMP_WORDS[at]}} in
            {names}) command=${{COMP_WORDS[at]}}; break ;;
        esac
    done
    COMPREPLY=()
    case "$command $prev" in
{values}
    esac
    case $command in
{commands}
    esac
    if [[ $words == "<path>" ]]; then
        compopt -o filenames 2>/dev/null
        mapfile -t COMPREPLY < <(compgen -f -- "$cur")
    elif [[ -n $words ]]; then
        mapfile -t COMPREPLY < <(compgen -W "$words" -- "$cur")
    fi
}}
complete -F _{function} {program}
"""


def bash_script(program: str, commands: tuple[Command, ...]) -> str:
    """Give the script for bash."""
    values, plain = [], []
    for command in commands:
        for option in command.options:
            if option.takes:
                then = _bash_words(option)
                patterns = "|".join(f'"{command.name} {name}"' for name in option.names)
                values.append(f"        {patterns}) {then} command=-value ;;")
        names = " ".join(name for option in command.options for name in option.names)
        if command.name:
            rest = command.values[-1] if command.values else None
            other = "" if rest is None else _bash_words(rest)
        else:
            other = 'words="' + " ".join(each.name for each in commands if each.name) + '";'
        pattern = command.name or '""'
        plain.append(
            f'        {pattern}) if [[ $cur == -* ]]; then words="{names}"; '
            f"else {other or ':;'} fi ;;"
        )
    return _BASH.format(
        program=program,
        function=program.replace("-", "_"),
        names="|".join(each.name for each in commands if each.name),
        values="\n".join(values),
        commands="\n".join(plain),
    )


def _bash_words(option: Option) -> str:
    if option.words:
        return f'words="{" ".join(option.words)}";'
    return 'words="<path>";' if option.is_path else "words=;"


# zsh --------------------------------------------------------------------------------------


def zsh_script(program: str, commands: tuple[Command, ...]) -> str:
    """Give the script for zsh."""
    function = program.replace("-", "_")
    described = "\n".join(
        f"        {_quoted(f'{each.name}:{each.about}')}" for each in commands if each.name
    )
    cases = "\n".join(
        f"        {each.name})\n            _arguments {_zsh_specs(each)}\n            ;;"
        for each in commands
        if each.name
    )
    return (
        f"#compdef {program}\n"
        f"# Completion of {program} for zsh. Load it with\n"
        f"#   source <({program} completion zsh)\n"
        f"_{function}() {{\n"
        "    local state line\n"
        "    local -a commands\n"
        f"    commands=(\n{described}\n    )\n"
        f"    _arguments -C {_zsh_specs(commands[0])} \\\n"
        "        '1: :->command' '*:: :->rest'\n"
        "    case $state in\n"
        "    command) _describe command commands ;;\n"
        "    rest)\n"
        "        case $line[1] in\n"
        f"{cases}\n"
        "        esac\n"
        "        ;;\n"
        "    esac\n"
        "}\n"
        f"compdef _{function} {program}\n"
    )


def _zsh_specs(command: Command) -> str:
    specs = []
    for option in command.options:
        for name in option.names:
            about = option.about.replace("[", "(").replace("]", ")").replace(":", ";")
            value = f":value:{_zsh_value(option)}" if option.takes else ""
            joined = "=" if option.takes and name.startswith("--") else ""
            specs.append(_quoted(f"*{name}{joined}[{about}]{value}"))
    specs += [_quoted(f"*:value:{_zsh_value(value)}") for value in command.values[-1:]]
    return " ".join(specs)


def _zsh_value(option: Option) -> str:
    if option.words:
        return f"({' '.join(option.words)})"
    return "_files" if option.is_path else " "


def _quoted(text: str) -> str:
    return "'" + text.replace("'", "'\\''") + "'"


# fish -------------------------------------------------------------------------------------


def fish_script(program: str, commands: tuple[Command, ...]) -> str:
    """Give the script for fish."""
    lines = [
        f"# Completion of {program} for fish. Load it with",
        f"#   {program} completion fish | source",
        f"complete -c {program} -f",
    ]
    for command in commands:
        if command.name:
            when = _quoted(f"__fish_seen_subcommand_from {command.name}")
            about = _fish_quoted(command.about)
            lines.append(
                f"complete -c {program} -n __fish_use_subcommand -a {command.name} -d {about}"
            )
        else:
            when = "__fish_use_subcommand"
        for option in command.options:
            names = " ".join(
                f"-l {name[2:]}" if name.startswith("--") else f"-s {name[1:]}"
                for name in option.names
            )
            value = f" {_fish_value(option)}" if option.takes else ""
            about = _fish_quoted(option.about)
            lines.append(f"complete -c {program} -n {when} {names}{value} -d {about}")
        for each in command.values[-1:]:
            if each.words:
                lines.append(f"complete -c {program} -n {when} -a {_quoted(' '.join(each.words))}")
            elif each.is_path:
                lines.append(f"complete -c {program} -n {when} -F")
    return "\n".join(lines) + "\n"


def _fish_value(option: Option) -> str:
    if option.words:
        return f"-x -a {_quoted(' '.join(option.words))}"
    return "-r -F" if option.is_path else "-x"


def _fish_quoted(text: str) -> str:
    escaped = text.replace("\\", "\\\\").replace("'", "\\'")
    return f"'{escaped}'"


#: Script writers by shell.
SHELLS: dict[str, Callable[[str, tuple[Command, ...]], str]] = {
    "bash": bash_script,
    "zsh": zsh_script,
    "fish": fish_script,
}
