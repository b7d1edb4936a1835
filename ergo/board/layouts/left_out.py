"""Who is left out: which people, where in the stroke, and to which limit."""

from typing import Any

import numpy as np
from dash import html

from ergo.board import drawings
from ergo.board.layouts.figures import export, figure
from ergo.evaluation.results import Results


def body(results: Results) -> list[Any]:
    """Return the page for results."""
    crowd = results.crowd
    lost = ~crowd.served
    women, men = int((lost & crowd.women).sum()), int((lost & ~crowd.women).sum())
    count = crowd.served.size
    split = f"{women} {'woman' if women == 1 else 'women'} and {men} {'man' if men == 1 else 'men'}"
    head = f"{int(lost.sum())} of {count} operators are left out: {split}."
    if not lost.any():
        head = f"All {count} operators are served."
    return [
        html.H2(head),
        html.P(_size_or_strength(results), className="lead"),
        html.Div(
            [figure(drawings.left_out, results, "left_out"), figure(drawings.left_out_strip, results, "left_out_strip")],
            className="figures",
        ),
        html.P([export("People as CSV", "csv:people"), " ", export("Stroke as CSV", "csv:stroke")]),
    ]  # fmt: skip


def _size_or_strength(results: Results) -> str:
    """Say whether the people left out are told apart by size or by strength, from their medians."""
    crowd = results.crowd
    lost, kept = ~crowd.served, crowd.served
    if not lost.any() or not kept.any():
        return "A dot a person: stature across, strength up."
    tall = float(np.median(crowd.stature_mm[lost]) - np.median(crowd.stature_mm[kept]))
    strong = 100.0 * float(np.median(crowd.strength_share[lost]) / np.median(crowd.strength_share[kept]) - 1.0)
    return (
        f"By the medians, those left out are {abs(tall):.0f} mm {'shorter' if tall < 0 else 'taller'} and "
        f"{abs(strong):.0f} % {'weaker' if strong < 0 else 'stronger'} than those served."
    )
