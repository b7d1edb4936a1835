"""HTML and Markdown: the same content, self-contained, every user's character literal."""

import re
from html.parser import HTMLParser

import pytest

from ergo.report.bundle import single
from ergo.report.html import results_html
from ergo.report.markdown import literal

HOSTILE = '<script>alert("x")</script> [a](http://b.c) *bold* `code` | cell # head'


class Reader(HTMLParser):
    def __init__(self):
        super().__init__()
        self.tags, self.words, self.links, self.open = [], [], [], []

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        self.links += [value for key, value in attrs if key in ("src", "href", "xlink:href")]
        if tag not in ("meta", "br", "img"):
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.tags.append(tag)

    def handle_endtag(self, tag):
        assert self.open.pop() == tag

    def handle_data(self, data):
        self.words.append(data)


def read(content):
    reader = Reader()
    reader.feed(content if isinstance(content, str) else content.decode())
    reader.close()
    return reader


def test_html_needs_nothing_else(short):
    content = single(short, ".html").decode()
    reader = read(content)
    assert reader.links == []
    assert "url(data:font/woff2" in content
    assert not re.findall(r"url\((?!data:)", content)
    assert reader.open == []


def test_html_has_every_rating_and_source(short):
    words = " ".join(read(single(short, ".html")).words)
    for rating in short.ratings.values():
        assert rating.reason in words
    for row in short.sources:
        assert row["source"] in words


def test_html_of_a_hostile_title_has_no_new_tags(factory, short):
    hostile = read(single(factory.renamed(short, HOSTILE), ".html"))
    assert "script" not in hostile.tags
    assert HOSTILE in hostile.words
    assert sorted(set(hostile.tags)) == sorted(set(read(single(short, ".html")).tags))


def test_a_notebook_shows_verdict_and_ratings(factory, short):
    reader = read(results_html(factory.renamed(short, HOSTILE)))
    words = " ".join(reader.words)
    assert short.reasons[0] in words
    assert all(r.reason in words for r in short.ratings.values())
    assert "script" not in reader.tags


@pytest.mark.parametrize(
    ("text", "quoted"),
    [
        ("# head", "\\# head"),
        ("- item", "\\- item"),
        ("12. item", "12\\. item"),
        ("*b* _i_ a_b", "\\*b\\* \\_i\\_ a_b"),
        ("<b> [a](b) `c` |", "\\<b\\> \\[a\\](b) \\`c\\` \\|"),
        ("https://a.b", "https\\://a.b"),
        ("plain words, 12.5 N.", "plain words, 12.5 N."),
    ],
)
def test_markdown_takes_characters_literally(text, quoted):
    assert literal(text) == quoted


def test_markdown_has_every_rating_and_no_stray_markup(factory, short):
    content = single(factory.renamed(short, HOSTILE), ".md").decode()
    assert content.splitlines()[0] == f"# {literal(HOSTILE)}"
    for rating in short.ratings.values():
        assert literal(rating.reason) in content
    assert "<script>" not in content


def test_markdown_tables_have_as_many_cells_as_their_head(factory, short):
    lines = single(factory.renamed(short, HOSTILE), ".md").decode().splitlines()
    width = None
    for line in lines:
        cells = len(re.findall(r"(?<!\\)\|", line)) if line.startswith("|") else 0
        if not cells:
            width = None
            continue
        width = width or cells
        assert cells == width, line
