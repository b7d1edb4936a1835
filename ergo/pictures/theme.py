"""Inks, line weights, dashes and marks of the one drawing language."""

from dataclasses import dataclass

FAMILY = "'Pullward Sans','DejaVu Sans',sans-serif"
MACHINE, PATH, THIN = 2.0, 1.5, 0.75
TEXT, SMALL, TITLE = 11.0, 9.5, 13.0
WOMEN_DASH, MEN_DASH = "6 3", ""
CENTRE_DASH, HIDDEN_DASH, DOTTED = "10 2 2 2", "4 2.5", "0.1 4"
UNITS_PER_PAPER_MM = 4.0
# A stroke direction counts as pull or push when over a third of it lies that way, else it is neither; the same
# bound as in the direction rating.
CLEAR_SHARE = 0.35
# Numbers closer than this are the same number on paper.
DECIMALS = 2


@dataclass(frozen=True)
class Ink:
    """The inks of one paper: readable without colour, since every hue comes with a mark of its own."""

    paper: str
    ink: str
    grey: str
    pale: str
    pull: str
    pull_tint: str
    push: str
    push_tint: str
    neither_tint: str
    band: tuple[str, str, str]


LIGHT = Ink(
    paper="#fbfaf6",
    ink="#1b1e22",
    grey="#5c6168",
    pale="#c4c6c4",
    pull="#164a8a",
    pull_tint="#c3d6ee",
    push="#8f5208",
    push_tint="#e9c690",
    neither_tint="#dcdcd8",
    band=("#e7ebef", "#d2dae2", "#b5c2cf"),
)
PRINT = Ink(
    paper="#ffffff",
    ink="#16181b",
    grey="#55595f",
    pale="#bdbfc2",
    pull="#164a8a",
    pull_tint="#c6d8ef",
    push="#8f5208",
    push_tint="#ecca96",
    neither_tint="#dedede",
    band=("#e9edf1", "#d3dbe3", "#b6c3d0"),
)
DARK = Ink(
    paper="#101a29",
    ink="#e8ebf0",
    grey="#a3adbb",
    pale="#3f4d63",
    pull="#8fbdf5",
    pull_tint="#24466f",
    push="#e9b35c",
    push_tint="#5c431b",
    neither_tint="#2b384b",
    band=("#1b2838", "#27384c", "#384c65"),
)
INKS = {"light": LIGHT, "print": PRINT, "dark": DARK}

# Shapes tell limits apart, so that a copy without colour still does. In the order in which limits are met.
SHAPES = ("triangle", "square", "diamond", "cross", "plus", "bar", "wedge", "star")


def way(pull: float) -> str:
    """Return `pull`, `push` or `neither` for the part of the work direction toward the trunk."""
    if pull >= CLEAR_SHARE:
        return "pull"
    return "push" if pull <= -CLEAR_SHARE else "neither"


def hues(ink: Ink, kind: str) -> tuple[str, str]:
    """Return line and tint of `pull`, `push` or `neither`."""
    named = {"pull": (ink.pull, ink.pull_tint), "push": (ink.push, ink.push_tint)}
    return named.get(kind, (ink.grey, ink.neither_tint))
