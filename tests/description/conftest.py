"""Loading a text as a document."""

import pytest
from support.part_lists import DOCUMENT, PLACE, POWER

from enclosure_check.description.load import load_document
from enclosure_check.description.problems import DocumentError, Problem


@pytest.fixture
def load(tmp_path):
    def of(text: str):
        path = tmp_path / "box.yaml"
        path.write_text(text, encoding="utf-8")
        return load_document(str(path))

    return of


@pytest.fixture
def refused(load):
    def of(text: str) -> list[Problem]:
        with pytest.raises(DocumentError) as caught:
            load(text)
        return list(caught.value.problems)

    return of


@pytest.fixture
def listed(tmp_path):
    """Load a document with a placement list and a power list."""

    def of(place: str = PLACE, power: str = POWER, *edits: tuple[str, str], more: str = ""):
        text = DOCUMENT
        for old, new in edits:
            assert old in text
            text = text.replace(old, new)
        (tmp_path / "place.csv").write_bytes(place.encode())
        (tmp_path / "power.csv").write_bytes(power.encode())
        (tmp_path / "box.yaml").write_text(text + more)
        return load_document(str(tmp_path / "box.yaml"))

    return of


@pytest.fixture
def problems(listed, tmp_path):
    """Give what is wrong, without the folder."""

    def of(*given, more: str = "") -> list[str]:
        with pytest.raises(DocumentError) as caught:
            listed(*given, more=more)
        return [str(each).replace(f"{tmp_path}/", "") for each in caught.value.problems]

    return of
