"""Every document made invalid on purpose is refused at a place and by name."""

import pytest
from support.hanging import ends
from support.mutations import FULL, Mutation, mutated_documents

from enclosure_check.description.load import load_document
from enclosure_check.description.problems import DocumentError

MUTATIONS = list(mutated_documents())


def test_unmutated_document_is_valid():
    assert len(load_document(str(FULL)).cases()) == 3


def test_there_are_enough_and_no_two_are_the_same():
    assert len(MUTATIONS) >= 500
    assert len({mutation.label for mutation in MUTATIONS}) == len(MUTATIONS)
    assert len({mutation.data for mutation in MUTATIONS}) == len(MUTATIONS)


@pytest.mark.parametrize("mutation", MUTATIONS, ids=[each.label for each in MUTATIONS])
def test_refused(mutation: Mutation, tmp_path):
    path = tmp_path / "enclosure.yaml"
    path.write_bytes(mutation.data)
    with ends(), pytest.raises(DocumentError) as caught:
        load_document(str(path))
    problems = caught.value.problems
    assert problems
    assert all(each.line >= 1 and each.column >= 1 for each in problems)
    assert all(str(each).isprintable() for each in problems)
    if mutation.field is not None:
        assert mutation.field in {each.field for each in problems}
