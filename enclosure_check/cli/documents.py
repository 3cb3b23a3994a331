"""Which documents a command is asked to read: files as they are named, and those within folders."""

import os
import re
from collections.abc import Iterator, Sequence
from typing import NamedTuple

ENDINGS = (".yaml", ".yml")
# Keys at the left margin by which a YAML file within a folder is known to be a document: a
# sound one has two of them, one with a misspelt key or a slip in its YAML mostly still has.
TELLING = ("box", "boards", "parts", "surroundings")
FEWEST_TELLING = 2
# Bounds of what is looked at within folders.
MAX_DOCUMENTS = 500
MAX_ENTRIES = 100_000
MAX_BYTES = 1 << 20

_TELLING = rb"^[\"']?(%s)[\"']?[ \t]*:" % "|".join(TELLING).encode()


class Documents(NamedTuple):
    """The documents found, and the folders that have none, with the reason."""

    paths: tuple[str, ...]
    refused: tuple[tuple[str, str], ...]


def is_several(arguments: Sequence[str]) -> bool:
    """Tell whether several documents are asked for: more than one path, or a folder."""
    return len(arguments) > 1 or any(map(os.path.isdir, arguments))


def find_documents(arguments: Sequence[str]) -> Documents:
    """Find what is to be read, in the order asked for, each file once.

    A file that is named is taken as it is. Within a folder and its sub-folders, sorted, every
    file is taken that ends in ``.yaml`` or ``.yml`` and has two of the keys in `TELLING` at the
    left margin. Names that start with a dot, links to folders and links that lead out of the
    folder are passed over.
    """
    found: dict[str, str] = {}
    refused = []
    for argument in arguments:
        if not os.path.isdir(argument):
            found.setdefault(_identity(argument), argument)
            continue
        inside, reason = _inside(argument)
        for path in inside:
            found.setdefault(_identity(path), path)
        if reason:
            refused.append((argument, reason))
    return Documents(tuple(found.values()), tuple(refused))


def _identity(path: str) -> str:
    try:
        return os.path.realpath(path)
    except (OSError, ValueError):
        return path


def _inside(folder: str) -> tuple[list[str], str]:
    """Give the documents in a folder, or the reason why it has none."""
    files: list[str] = []
    for count, path in enumerate(_files(folder)):
        if count >= MAX_ENTRIES:
            return [], f"more than {MAX_ENTRIES} files in it; name a smaller folder"
        if path.lower().endswith(ENDINGS) and _is_within(path, folder) and is_document(path):
            files.append(path)
        if len(files) > MAX_DOCUMENTS:
            return [], f"more than {MAX_DOCUMENTS} documents in it; name a smaller folder"
    reason = (
        ""
        if files
        else (
            f"no document in it: no {' or '.join(ENDINGS)} file with two of the keys "
            f"{', '.join(TELLING)} at the left margin"
        )
    )
    return sorted(files, key=lambda path: path.split(os.sep)), reason


def _files(folder: str) -> Iterator[str]:
    for where, folders, names in os.walk(folder):
        folders[:] = sorted(name for name in folders if not name.startswith("."))
        for name in names:
            if not name.startswith("."):
                path = os.path.normpath(os.path.join(where, name))
                yield path


def _is_within(path: str, folder: str) -> bool:
    top, real = os.path.realpath(folder), os.path.realpath(path)
    return os.path.isfile(real) and os.path.commonpath([top, real]) == top


def is_document(path: str) -> bool:
    """Tell whether a file looks like a document; one that cannot be read might be one."""
    try:
        with open(path, "rb") as file:
            found = re.findall(_TELLING, file.read(MAX_BYTES), re.MULTILINE)
    except OSError:
        return True
    return len(set(found)) >= FEWEST_TELLING
