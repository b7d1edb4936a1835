"""The report as Markdown: plain text with every user's character taken literally."""

import re

from ergo.report.blocks import Block, Claim, Picture, Points, Report, Rows, Words
from ergo.report.claims import listed

_ALWAYS = re.compile(r"([\\`*\[\]<>|~$&^@])|(?<!\w)(_)|(_)(?!\w)")
_AT_START = re.compile(r"^(\s*)([#+\-=]|\d+(?=[.)]))")
_LINKS = re.compile(r"(?i)(:)(?=//)|(?<=www)(\.)")


def literal(text: str) -> str:
    """Return text in which no character is markup, escaping no more than that needs."""
    one_line = " ".join(text.split("\n"))
    quoted = _ALWAYS.sub(lambda m: "\\" + m.group(0), one_line)
    quoted = _LINKS.sub(lambda m: "\\" + m.group(0), quoted)
    start = _AT_START.match(quoted)
    if start is None:
        return quoted
    head, mark = start.groups()
    rest = quoted[start.end() :]
    return f"{head}\\{mark}{rest}" if not mark.isdigit() else f"{head}{mark}\\{rest}"


def page(made: Report, version: str, drawings_at: str | None = None) -> bytes:
    """Return the report as a Markdown file; drawings are linked in the folder `drawings_at` when there is one."""
    lines = [f"# {literal(made.title)}", ""]
    if made.subtitle:
        lines += [literal(made.subtitle), ""]
    lines += [f"**{literal(made.verdict)}**", ""]
    for block in made.opening:
        lines += _block(block, drawings_at)
    facts = tuple((name, value, "", "") for name, value in made.facts)
    lines += _table(Rows("", ("", "name", "signature", "date"), facts))
    for number, section in enumerate(made.sections, 1):
        lines += [f"## {number} {literal(section.title)}", ""]
        for block in section.blocks:
            lines += _block(block, drawings_at)
    lines += ["---", "", f"Screening calculation from population data; not a risk assessment. Pullward {version}", ""]
    return "\n".join(lines).encode()


def _block(block: Block, drawings_at: str | None) -> list[str]:
    if isinstance(block, Words):
        return [f"### {literal(block.text)}" if block.strong else literal(block.text), ""]
    if isinstance(block, Points):
        mark = "- [ ]" if block.boxes else "-"
        return [*(f"{mark} {literal(text)}" for text in block.items), ""]
    if isinstance(block, Rows):
        return _table(block)
    if isinstance(block, Claim):
        return _claim(block)
    return _picture(block, drawings_at)


def _claim(block: Claim) -> list[str]:
    below = " (below target)" if block.met is False else ""
    return [
        f"> **{literal(block.name)}**: {literal(block.sentence)}",
        ">",
        f"> - number: **{literal(block.number)}**{below}",
        f"> - interval: {literal(block.interval)}",
        f"> - target: {literal(block.target)}",
        f"> - rests on: {literal(listed(block))}",
        "",
    ]


def _table(block: Rows) -> list[str]:
    def line(cells: tuple[str, ...]) -> str:
        return "| " + " | ".join(literal(c) for c in cells) + " |"

    title = [f"*{literal(block.title)}*", ""] if block.title else []
    return [*title, line(block.columns), "|" + " --- |" * len(block.columns), *(line(row) for row in block.rows), ""]


def _picture(block: Picture, drawings_at: str | None) -> list[str]:
    drawing = block.drawing
    link = [f"![{literal(drawing.alt)}]({drawings_at}/{drawing.name}.svg)", ""] if drawings_at else []
    return [*link, literal(block.caption), "", *_table(Rows(drawing.title, drawing.columns, drawing.rows))]
