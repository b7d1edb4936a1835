"""The PDF: what a reader and a screen reader find in it, and the same bytes every time."""

import io
import subprocess
import sys
from pathlib import Path

import pytest

pypdf = pytest.importorskip("pypdf")

from ergo.report.bundle import single  # noqa: E402
from ergo.report.compile import printable  # noqa: E402

INVISIBLE = str.maketrans("", "", "\u200b\u00ad")
HOSTILE = {
    "typst": '#panic("x") *b* _i_ $x^2$ @ref <label> \\ `raw` = Heading #import "a.typ": *',
    "html": "<script>alert(1)</script><img src=x onerror=y> &amp; ]]>",
    "latex": "\\input{/etc/passwd} $\\frac{1}{2}$ % {}",
    "right to left": "מנוף יד שמאל",
    "emoji": "Lever 🙂 😀",
    "unheard of": "杠杆 \U0001f9ff",
    "turned": "\u202eevil\u202c lever",
}


def text(content):
    reader = pypdf.PdfReader(io.BytesIO(content))
    return "\n".join(page.extract_text() for page in reader.pages).translate(INVISIBLE)


def close(words):
    return "".join(words.split())


@pytest.fixture(scope="module")
def pdf(short):
    return single(short, ".pdf")


def test_every_rating_is_in_the_text(pdf, short):
    words = close(text(pdf))
    for rating in short.ratings.values():
        assert close(f"{rating.value:.1f}") in words
        assert close(rating.reason) in words


def test_every_source_key_is_in_the_text(pdf, short):
    words = close(text(pdf))
    for row in short.sources:
        assert row["source"] in words
        assert row["status"] in words


def test_page_one_says_that_it_falls_short(pdf):
    first = pypdf.PdfReader(io.BytesIO(pdf)).pages[0].extract_text().translate(INVISIBLE)
    assert "falls short" in first
    assert close("force 71.3 of 100, target 95.0") in close(first)
    assert "signature" in first


def test_two_runs_give_the_same_bytes(pdf, short):
    assert single(short, ".pdf") == pdf


def test_another_process_gives_the_same_bytes(pdf):
    code = (
        "import importlib.util, sys\n"
        "spec = importlib.util.spec_from_file_location('made_results', sys.argv[1])\n"
        "m = importlib.util.module_from_spec(spec); sys.modules['made_results'] = m; spec.loader.exec_module(m)\n"
        "from ergo.report.bundle import single\n"
        "sys.stdout.buffer.write(single(m.made(short=True), '.pdf'))\n"
    )
    made = Path(__file__).parent.parent / "pictures" / "made_results.py"
    run = subprocess.run([sys.executable, "-c", code, str(made)], capture_output=True, check=True)
    assert run.stdout == pdf


def test_it_is_tagged_titled_and_in_a_language(pdf):
    root = pypdf.PdfReader(io.BytesIO(pdf)).trailer["/Root"]
    assert root["/MarkInfo"]["/Marked"]
    assert "/StructTreeRoot" in root
    assert root["/Lang"].startswith("en")
    assert root["/ViewerPreferences"]["/DisplayDocTitle"]
    assert pypdf.PdfReader(io.BytesIO(pdf)).metadata.title == "Made lever"


def test_it_claims_pdf_a_and_pdf_ua(pdf):
    metadata = pypdf.PdfReader(io.BytesIO(pdf)).trailer["/Root"]["/Metadata"].get_data()
    assert b"<pdfaid:part>2</pdfaid:part>" in metadata
    assert b"<pdfaid:conformance>A</pdfaid:conformance>" in metadata
    assert b"<pdfuaid:part>1</pdfuaid:part>" in metadata


def figures(node):
    kids = node.get("/K", [])
    kids = kids if isinstance(kids, list) else [kids]
    found = [node] if node.get("/S") == "/Figure" else []
    for kid in kids:
        kid = kid.get_object() if hasattr(kid, "get_object") else kid
        if isinstance(kid, dict):
            found += figures(kid)
    return found


def test_every_drawing_has_words_for_those_who_cannot_see_it(pdf):
    found = figures(pypdf.PdfReader(io.BytesIO(pdf)).trailer["/Root"]["/StructTreeRoot"])
    assert len(found) == 6
    assert all(len(figure["/Alt"]) > 20 for figure in found)


def test_only_shipped_faces_are_used(pdf):
    names = set()
    for page in pypdf.PdfReader(io.BytesIO(pdf)).pages:
        for font in page["/Resources"].get("/Font", {}).values():
            names.add(font.get_object()["/BaseFont"].split("+")[-1])
    assert {n for n in names if not n.startswith(("PullwardSans", "DejaVuSans"))} == set()


@pytest.mark.parametrize("title", HOSTILE.values(), ids=HOSTILE.keys())
def test_a_hostile_title_is_plain_text(factory, short, title):
    from ergo.pictures.sheet import plain

    made = single(factory.renamed(short, title), ".pdf")
    wanted = printable(plain(title)).translate(INVISIBLE)
    words = close(text(made))
    if any("\u0590" <= c <= "\u05ff" for c in title):
        # An extractor gives right-to-left words in the order of the page or of the text.
        assert all(word in words or word[::-1] in words for word in wanted.split())
    else:
        assert close(wanted) in words


def test_ten_thousand_characters_stay_whole_in_the_inputs(factory, short):
    title = "".join(chr(ord("a") + n % 26) for n in range(10_000))
    made = single(factory.renamed(short, title), ".pdf")
    found = close(text(made))
    # Pages break the run with their heading and foot; every stretch of 16 letters is there.
    assert sum(title[n : n + 16] in found for n in range(0, 10_000, 16)) == 625


def test_characters_of_no_shipped_face_are_written_as_code_points():
    assert printable("a杠") == "a[U+6760]"
    assert printable("🙂") == "[U+1F642]"
    assert printable("😀") == "😀"
