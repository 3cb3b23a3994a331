"""Files a document names: none outside its folder, and nothing but plain files."""

import os
import socket
import threading

import pytest

from enclosure_check.description.inside_folder import RefusedError, read_inside


@pytest.fixture
def place(tmp_path):
    """A folder with a document, and a secret outside it."""
    home = tmp_path / "home"
    (home / "sub").mkdir(parents=True)
    (tmp_path / "home_too").mkdir()
    (tmp_path / "secret.csv").write_text("secret")
    (tmp_path / "home_too" / "secret.csv").write_text("secret")
    (home / "box.yaml").write_text("")
    (home / "list.csv").write_text("list")
    (home / "sub" / "list.csv").write_text("deeper")
    return home


def read(place, name, *allowed, most=100):
    return read_inside(name, str(place / "box.yaml"), [str(each) for each in allowed], most)


def refused(place, name, *allowed, most=100) -> str:
    with pytest.raises(RefusedError) as caught:
        read(place, name, *allowed, most=most)
    return str(caught.value)


@pytest.mark.parametrize(
    ("name", "data"),
    [
        ("list.csv", b"list"),
        ("./list.csv", b"list"),
        ("sub/list.csv", b"deeper"),
        ("sub/../list.csv", b"list"),
    ],
)
def test_inside(place, name, data):
    assert read(place, name) == data


def test_the_document_may_be_named_from_its_folder(place, monkeypatch):
    monkeypatch.chdir(place)
    assert read_inside("list.csv", "box.yaml", [], 100) == b"list"


def test_a_document_that_is_a_link_stands_where_it_leads(place, tmp_path):
    (tmp_path / "link.yaml").symlink_to(place / "box.yaml")
    assert read_inside("list.csv", str(tmp_path / "link.yaml"), [], 100) == b"list"
    with pytest.raises(RefusedError):
        read_inside("secret.csv", str(tmp_path / "link.yaml"), [], 100)


@pytest.mark.parametrize(
    "name", ["../secret.csv", "sub/../../secret.csv", "../home_too/secret.csv", "/etc/passwd"]
)
def test_outside(place, name):
    assert "leads out of the document's folder" in refused(place, name)


def test_outside_is_refused_whether_it_exists_or_not(place):
    assert refused(place, "../no_such.csv") == refused(place, "../secret.csv")


def test_an_absolute_path_inside(place):
    assert read(place, str(place / "list.csv")) == b"list"


@pytest.mark.parametrize(
    "name",
    ["\\\\server\\share\\a.csv", "..\\secret.csv", "C:/a.csv", "//server/a.csv", "~/a.csv", "a:b"],
)
def test_other_ways_out(place, name):
    assert "allowed: a path from the document's folder" in refused(place, name)


def test_links(place, tmp_path):
    (place / "in.csv").symlink_to(place / "sub" / "list.csv")
    (place / "out.csv").symlink_to(tmp_path / "secret.csv")
    (place / "folder").symlink_to(tmp_path)
    (place / "loop.csv").symlink_to(place / "loop.csv")
    assert read(place, "in.csv") == b"deeper"
    assert "leads out" in refused(place, "out.csv")
    assert "leads out" in refused(place, "folder/secret.csv")
    assert refused(place, "loop.csv")


def test_a_folder_that_is_allowed(place, tmp_path):
    assert read(place, "../secret.csv", tmp_path) == b"secret"
    assert read(place, "../home_too/secret.csv", tmp_path / "home_too") == b"secret"
    assert "leads out" in refused(place, "../secret.csv", tmp_path / "home_too")


def test_no_plain_files(place):
    os.mkfifo(place / "pipe.csv")
    # A thread, so that a reader that waits for the pipe fails the test instead of hanging it.
    found = []
    thread = threading.Thread(target=lambda: found.append(refused(place, "pipe.csv")), daemon=True)
    thread.start()
    thread.join(5)
    assert found == ["no plain file"]
    assert refused(place, "sub") == "no plain file"
    with socket.socket(socket.AF_UNIX) as server:
        server.bind(os.path.relpath(place / "socket.csv"))
        assert refused(place, "socket.csv") == "no plain file"
    assert refused(place, "/dev/zero", "/dev") == "no plain file"


def test_what_cannot_be_read(place):
    assert "No such file" in refused(place, "no_such.csv")
    assert refused(place, "a\0b")
    assert refused(place, "a" * 5000)


def test_the_longest_file(place):
    (place / "long.csv").write_bytes(b"x" * 100)
    assert len(read(place, "long.csv")) == 100
    (place / "long.csv").write_bytes(b"x" * 101)
    assert "larger than" in refused(place, "long.csv")
