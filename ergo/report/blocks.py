"""The report's building blocks: the same content for PDF, HTML and Markdown."""

from dataclasses import dataclass, field

from ergo.pictures.sheet import Drawing


@dataclass(frozen=True)
class Words:
    """One paragraph; `strong` for a sentence nobody may miss."""

    text: str
    strong: bool = False


@dataclass(frozen=True)
class Points:
    """A list of sentences; `boxes` when the reader is to tick them off on paper."""

    items: tuple[str, ...]
    boxes: bool = False


@dataclass(frozen=True)
class Rows:
    """A table: `widths` are shares of the page, `keys` tells columns of codes that are set in small type."""

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    widths: tuple[float, ...] = ()


@dataclass(frozen=True)
class Picture:
    """A drawing with its caption; `twin` prints its rows below it as well."""

    drawing: Drawing
    caption: str
    twin: bool = False


@dataclass(frozen=True)
class Claim:
    """One step of the argument: nothing is claimed without its number.

    `number` carries its unit, `interval` says what it lies between, `backing` names source keys with the
    weakest status among the numbers that the claim rests on; `backing_words` stand in where the same were named before.
    """

    name: str
    sentence: str
    number: str
    interval: str
    target: str
    met: bool | None
    backing: tuple[tuple[str, str], ...]
    backing_words: str = ""


Block = Words | Points | Rows | Picture | Claim


@dataclass(frozen=True)
class Section:
    """A numbered section."""

    title: str
    blocks: tuple[Block, ...]
    fresh_page: bool = False


@dataclass(frozen=True)
class Report:
    """The whole report."""

    title: str
    subtitle: str
    meets: bool
    verdict: str
    facts: tuple[tuple[str, str], ...]
    opening: tuple[Block, ...]
    sections: tuple[Section, ...]
    cautions: tuple[str, ...]
    date: tuple[int, int, int] | None = None
    drawings: tuple[Drawing, ...] = field(default=())
