"""Loading a text as a document."""

import pytest

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
