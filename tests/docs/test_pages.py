"""Every page: links lead somewhere, examples can be used, generated pages are current."""

import re

import pytest

from enclosure_check.check import check
from enclosure_check.description.load import load_document
from enclosure_check.description.page import document_page
from enclosure_check.description.yaml_nodes import read_yaml
from enclosure_check.library.page import library_page

GENERATED = {
    "docs/document.md": ("enclosure_check.description.page", document_page),
    "docs/library.md": ("enclosure_check.library.page", library_page),
}


def is_complete(block):
    """Whether a YAML block is a document, not a piece of one."""
    return block.startswith("title:") or "\ntitle:" in block


def test_links_resolve(page, read_page, root):
    for link in page.links():
        if "://" in link:
            continue
        target, _, anchor = link.partition("#")
        path = (page.path.parent / target).resolve() if target else page.path
        assert path.is_relative_to(root)
        assert path.exists(), f"{page.name}: {link}"
        if anchor:
            there = read_page(path.relative_to(root).as_posix())
            assert anchor in there.anchors(), f"{page.name}: {link}"


def test_every_page_of_docs_is_linked_from_the_readme_or_the_guide_for_developers(root, read_page):
    linked = {
        (read_page(name).path.parent / link.partition("#")[0]).resolve()
        for name in ("README.md", "DEVELOPERS.md")
        for link in read_page(name).links()
    }
    assert {path for path in (root / "docs").glob("*.md") if path.resolve() not in linked} == set()


def test_yaml_blocks_load(page, tmp_path):
    for index, block in enumerate(page.blocks("yaml")):
        if is_complete(block):
            path = tmp_path / f"{index}.yaml"
            path.write_text(block, encoding="utf-8")
            assert check(load_document(str(path))).conditions
        else:
            assert read_yaml(block.encode(), page.name).entries


def test_there_are_examples(read_page):
    for name in ("README.md", "docs/document.md", "docs/coordinates.md"):
        assert any(is_complete(block) for block in read_page(name).blocks("yaml")), name


@pytest.mark.parametrize("name", GENERATED)
def test_generated_pages_are_current(name, read_page):
    module, write = GENERATED[name]
    command = f"python -m {module} > {name}"
    assert read_page(name).text == write(), f"out of date, run: {command}"
    assert f"`{command}`" in read_page(name).prose()
    assert f"{command}\n" in "\n".join(read_page("DEVELOPERS.md").blocks("sh"))


def test_files_named_in_the_guide_for_developers_exist(root, read_page):
    named = re.findall(r"`([\w/*.]+(?:\.py|\.yaml|\.md|/))`", read_page("DEVELOPERS.md").prose())
    assert len(named) > 30
    rooms = (root, root / "enclosure_check", *(root / "enclosure_check").glob("*/"))
    missing = [name for name in named if not any([*room.glob(name)] for room in rooms)]
    assert missing == []


def test_programs_named_in_the_guide_for_developers_exist(root, read_page):
    named = re.findall(r"python (tests/[\w/]+\.py)", read_page("DEVELOPERS.md").text)
    assert len(named) > 5
    assert [name for name in named if not (root / name).exists()] == []
