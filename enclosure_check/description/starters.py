"""Starters: small documents that run as they stand, with comments, to be made one's own."""

import os

_FOLDER = os.path.join(os.path.dirname(__file__), "starters")
# The modeline of the YAML language server, which editors with it follow to a JSON Schema; a comment
# to everything else.
MODELINE = "# yaml-language-server: $schema={}\n"
SCHEMA_FILE = "enclosure.schema.json"

KINDS = {
    "sealed_wall": "a sealed plastic box on a wall indoors",
    "vented": "a vented steel box on a wall indoors",
    "padded_outdoor": "a sealed die-cast box in the sun, a part padded to its wall",
}


def starter(kind: str, *, schema: str | None = None) -> str:
    """Give a starter as text.

    Parameters
    ----------
    kind
        One of `KINDS`.
    schema
        Path of the document's JSON Schema, as editors are to find it; none when left out.

    Raises
    ------
    KeyError
        When there is no such kind.
    """
    if kind not in KINDS:
        raise KeyError(kind)
    with open(os.path.join(_FOLDER, f"{kind}.yaml"), encoding="utf-8") as file:
        text = file.read()
    return text if schema is None else MODELINE.format(schema) + text
