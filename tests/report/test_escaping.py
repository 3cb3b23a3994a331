"""Any text whatever in the formats for other programs: they stay whole and say nothing else."""

from xml.etree import ElementTree

from hypothesis import given, settings
from hypothesis import strategies as st
from markdown_it import MarkdownIt

from enclosure_check.report.junit import xml_lines, xml_text
from enclosure_check.report.markdown import code
from enclosure_check.report.sarif import text as sarif_text

PARSER = MarkdownIt("commonmark").enable(["table", "strikethrough"])
# Every code point, halves of characters too, and much of what means something to a format.
TEXTS = st.text(
    st.characters() | st.sampled_from("<>&\"'`|[](){}\\@#*_~\n\r\t\x00\x1b\ufffe\ud800")
)


def shown(text: str) -> str:
    """A text as it is shown: what cannot be printed or encoded as its escape."""
    return "".join(
        char
        if char.isprintable() and not 0xD800 <= ord(char) < 0xE000
        else char.encode("unicode_escape").decode()
        for char in text
    )


@settings(max_examples=300, deadline=None)
@given(TEXTS)
def test_xml_gives_back_what_was_put_in(text):
    document = f'<a b="{xml_text(text)}">{xml_text(text)}</a>'.encode()
    element = ElementTree.fromstring(document)
    assert element.get("b") == (element.text or "") == shown(text)
    assert not element.findall("*")
    assert ElementTree.fromstring(f"<a>{xml_lines(text)}</a>".encode()) is not None


@settings(max_examples=300, deadline=None)
@given(TEXTS)
def test_markdown_is_one_code_span(text):
    span = code(text, 10_000)
    tokens = [child for each in PARSER.parse(f"x {span} y") for child in each.children or ()]
    wanted = shown(text).replace("`", "\\x60").replace("|", "\\x7c").strip()
    if wanted:
        assert [token.type for token in tokens] == ["text", "code_inline", "text"]
        assert tokens[1].content == wanted
    else:
        assert span == "-"


@settings(max_examples=300, deadline=None)
@given(TEXTS)
def test_sarif_has_no_link_and_no_placeholder(text):
    message = sarif_text(text)
    assert message.isprintable()
    assert set(message).isdisjoint("[]{}")
    for char, escape in (("[", r"\x5b"), ("]", r"\x5d"), ("{", r"\x7b"), ("}", r"\x7d")):
        message = message.replace(escape, char)
    if "\\x" not in text:
        assert message == shown(text)
