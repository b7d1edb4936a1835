"""The PDF: content to typst, bundled fonts only, the same bytes for the same content."""

import functools
import json
from typing import Any

from ergo.errors import DataError
from ergo.pictures import theme
from ergo.pictures.sheet import Drawing, plain
from ergo.report.blocks import Block, Claim, Picture, Points, Report, Rows, Words
from ergo.report.claims import listed
from ergo.sources import folder

STANDARDS: list[Any] = ["a-2a", "ua-1"]
# PDF/A wants a date; the clock would make every run another file, so the layout's own date stands in.
LAYOUT_DATE = (2026, 12, 1)
LONGEST_RUN = 32
# A table up to this size is kept on one page.
MOST_ROWS_WHOLE, MOST_TEXT_WHOLE = 14, 1200
BREAK = "\u200b"
FOOTER = "Screening calculation from population data; not a risk assessment. Pullward "


def font_folders() -> list[str]:
    """Return the folders of the shipped faces."""
    assets = folder("assets")
    return [str(assets / "web" / "fonts"), str(assets / "report" / "fonts")]


@functools.cache
def drawable() -> frozenset[int]:
    """Return the code points that some shipped face can draw."""
    from fontTools.ttLib import TTFont

    found: set[int] = set()
    for place in font_folders():
        for path in sorted(folder("assets").glob("*/fonts/*.ttf")):
            if str(path.parent) == place:
                with TTFont(path, lazy=True) as face:
                    found |= set(face.getBestCmap() or {})
    return frozenset(found)


def printable(text: str) -> str:
    """Return text for the page: what no shipped face can draw as its code point, long runs made breakable."""
    known = drawable()
    drawn = "".join(c if ord(c) in known or c == BREAK else f"[U+{ord(c):04X}]" for c in text)
    return " ".join(_breakable(word) for word in drawn.split(" "))


def _breakable(word: str) -> str:
    if len(word) <= LONGEST_RUN:
        return word.replace("_", f"_{BREAK}").replace(".", f".{BREAK}") if len(word) > 18 else word
    return BREAK.join(word[n : n + LONGEST_RUN // 2] for n in range(0, len(word), LONGEST_RUN // 2))


def pdf(made: Report, version: str) -> bytes:
    """Return the report as a PDF/A-2a and PDF/UA-1 file.

    Raises
    ------
    DataError
        When the typesetter refuses the page.
    """
    import typst

    files: Any = {
        "main.typ": (folder("assets") / "report" / "report.typ").read_bytes(),
        "data.json": json.dumps(page_data(made, version), ensure_ascii=False, sort_keys=True).encode(),
    }
    for drawing in made.drawings:
        files[f"{drawing.name}.svg"] = _page_svg(drawing).encode()
    try:
        return typst.compile(files, format="pdf", font_paths=font_folders(), ignore_system_fonts=True,
                             pdf_standards=STANDARDS)  # fmt: skip
    except RuntimeError as error:
        msg = f"the report cannot be typeset: {str(error).splitlines()[0]}"
        raise DataError(msg) from error


def page_data(made: Report, version: str) -> dict[str, Any]:
    """Return everything the page says, as plain data."""
    date = made.date or LAYOUT_DATE
    written = f"{date[0]:04d}-{date[1]:02d}-{date[2]:02d}" if made.date else ""
    facts = dict(made.facts)
    return {
        "title": printable(made.title),
        "short_title": printable(plain(made.title, 70)),
        "subtitle": printable(made.subtitle),
        "meets": made.meets,
        "verdict": printable(made.verdict),
        "verdict_word": "meets its targets" if made.meets else "falls short",
        "date": list(date),
        "footer": f"{FOOTER}{version}" + (f", revision {printable(facts['Revision'])}" if facts.get("Revision") else ""),
        "signatures": [
            ["Prepared by", printable(facts.get("Prepared by", "")), written],
            ["Reviewed by", printable(facts.get("Reviewed by", "")), ""],
            ["Revision", printable(facts.get("Revision", "")), ""],
        ],
        "opening": [_block(b) for b in made.opening],
        "sections": [
            {"title": s.title, "fresh_page": s.fresh_page, "blocks": [_block(b) for b in s.blocks]} for s in made.sections
        ],
    }  # fmt: skip


def _block(block: Block) -> dict[str, Any]:
    if isinstance(block, Words):
        return {"kind": "words", "text": printable(block.text), "strong": block.strong}
    if isinstance(block, Points):
        return {"kind": "points", "items": [printable(t) for t in block.items], "boxes": block.boxes}
    if isinstance(block, Rows):
        return {"kind": "rows", **_rows(block)}
    if isinstance(block, Claim):
        texts = {n: printable(getattr(block, n)) for n in ("name", "sentence", "number", "interval", "target")}
        return {"kind": "claim", "met": block.met, "backing": printable(listed(block)), **texts}
    return {"kind": "picture", **_picture(block)}


def _rows(block: Rows) -> dict[str, Any]:
    return {
        "title": printable(block.title),
        "columns": [printable(c) for c in block.columns],
        "rows": [[printable(c) for c in row] for row in block.rows],
        "widths": list(block.widths) or _widths(block),
        "long": len(block.rows) > MOST_ROWS_WHOLE or sum(len(c) for row in block.rows for c in row) > MOST_TEXT_WHOLE,
        "numeric": [n > 0 and all(_number_like(row[n]) for row in block.rows) for n in range(len(block.columns))],
    }


def _widths(block: Rows) -> list[float]:
    """Return column widths for a table that names none: as the longest cell, but a long column gives way."""
    longest = [max([len(c), 3, *(len(row[n]) for row in block.rows)]) for n, c in enumerate(block.columns)]
    return [min(v, 60.0) ** 0.75 for v in longest]


def _number_like(text: str) -> bool:
    return text == "not covered" or (text.lstrip("−-")[:1].isdigit() and len(text) < 12)


def _picture(block: Picture) -> dict[str, Any]:
    drawing = block.drawing
    twin = None
    if block.twin and drawing.rows:
        twin = _rows(Rows(drawing.title, drawing.columns, drawing.rows))
    return {
        "file": f"{drawing.name}.svg",
        "alt": printable(f"{drawing.title}. {drawing.alt}"),
        "caption": printable(block.caption),
        "width": drawing.width / theme.UNITS_PER_PAPER_MM,
        "twin": twin,
    }


def _page_svg(drawing: Drawing) -> str:
    """Return the drawing with every character that no shipped face has written as its code point."""
    known = drawable()
    return "".join(c if ord(c) in known or c in "\n\t" else f"[U+{ord(c):04X}]" for c in drawing.svg)
