"""The lever, its path and its people in space, for axes that no elevation shows in true length."""

from typing import Any

import numpy as np

from ergo.evaluation.results import Results
from ergo.pictures.machine_lines import key_positions, lever_points
from ergo.pictures.theme import Ink, way

CAMERAS = {
    "from the right": {"eye": {"x": 2.1, "y": 0.0, "z": 0.1}},
    "from the operator": {"eye": {"x": 0.0, "y": -2.1, "z": 0.3}},
    "from above": {"eye": {"x": 0.0, "y": -0.01, "z": 2.2}},
    "over the shoulder": {"eye": {"x": 1.3, "y": -1.5, "z": 0.9}},
}
FIRST_CAMERA = "over the shoulder"
BONES = ("foot", "knee", "hip", "neck", "head"), ("neck", "shoulder", "elbow", "wrist", "grip")
DASHES = {"pull": "solid", "push": "dash", "neither": "dot"}
Trace = dict[str, Any]


def space_figure(results: Results, position: int, ink: Ink) -> dict[str, Any]:
    """Return the scene at one stroke position as a plotly figure, axes in station millimetres, to one scale."""
    traces = [*_bench(results, ink), *_zones(results, ink), *_lever(results, position, ink), *_path(results, ink)]
    for n, person in enumerate(results.persons[:3]):
        traces += _person(person, position, ink, inked=n == 0)
    axis = {
        "color": ink.grey, "gridcolor": ink.pale, "backgroundcolor": ink.paper, "zeroline": False, "showspikes": False,
    }  # fmt: skip
    names = {"xaxis": "right, mm", "yaxis": "away, mm", "zaxis": "up, mm"}
    scene = {key: {**axis, "title": {"text": text}} for key, text in names.items()}
    return {
        "data": traces,
        "layout": {
            "scene": {**scene, "aspectmode": "data", "camera": CAMERAS[FIRST_CAMERA]},
            "paper_bgcolor": ink.paper,
            "margin": {"l": 0, "r": 0, "t": 0, "b": 0},
            "showlegend": False,
            "uirevision": "space",
            "font": {"family": "Pullward Sans, DejaVu Sans, sans-serif", "color": ink.ink, "size": 12},
        },
    }


def line(points: Any, colour: str, *, width: float = 3.0, dash: str = "solid", name: str = "") -> Trace:
    """Return a line through points (k, 3) [mm]."""
    xyz = np.asarray(points, dtype=float)
    return {
        "type": "scatter3d", "mode": "lines", "x": xyz[:, 0].tolist(), "y": xyz[:, 1].tolist(), "z": xyz[:, 2].tolist(),
        "line": {"color": colour, "width": width, "dash": dash}, "name": name,
        "hoverinfo": "name" if name else "skip",
    }  # fmt: skip


def _bench(results: Results, ink: Ink) -> list[Trace]:
    bench = results.study["bench"]
    path = np.asarray(results.stroke.handle_mm)
    left, right = float(path[:, 0].min()) - 350.0, float(path[:, 0].max()) + 350.0
    deep = max(float(path[:, 1].max()) + 150.0, 400.0)
    top, low = bench["surface_height_mm"], bench["surface_height_mm"] - bench["edge_thickness_mm"]
    edge = [[left, 0.0, top], [right, 0.0, top], [right, 0.0, low], [left, 0.0, low], [left, 0.0, top]]
    table = [[left, 0.0, top], [left, deep, top], [right, deep, top], [right, 0.0, top]]
    return [line(edge, ink.ink, name="bench edge"), line(table, ink.grey, width=2.0, name="bench")]


def _zones(results: Results, ink: Ink) -> list[Trace]:
    return [
        line(wire, ink.ink if zone["role"] == "hazard" else ink.grey, width=2.0,
             dash="solid" if zone["role"] == "hazard" else "dot", name=f"{zone['name']} ({zone['role']})")
        for zone in results.study.get("zones", ()) for wire in _wires(zone)
    ]  # fmt: skip


def _wires(zone: Any) -> list[Any]:
    turn = np.linspace(0.0, 2.0 * np.pi, 25)
    if zone["shape"] == "box":
        centre, half = np.array(zone["centre_mm"], dtype=float), np.array(zone["size_mm"], dtype=float) / 2.0
        ring = np.array([[-1, -1], [1, -1], [1, 1], [-1, 1], [-1, -1]], dtype=float)
        made = [centre + half * np.column_stack([ring, np.full(5, level)]) for level in (-1.0, 1.0)]
        return made + [centre + half * np.array([[x, y, -1.0], [x, y, 1.0]]) for x, y in ring[:4]]
    if zone["shape"] == "ball":
        centre, flat = np.array(zone["centre_mm"], dtype=float), zone["radius_mm"] * np.array([np.cos(turn), np.sin(turn)])
        axes = np.eye(3)
        return [centre + np.outer(flat[0], axes[a]) + np.outer(flat[1], axes[b]) for a, b in ((0, 1), (1, 2), (0, 2))]
    start, end = np.array(zone["from_mm"], dtype=float), np.array(zone["to_mm"], dtype=float)
    along = (end - start) / max(float(np.linalg.norm(end - start)), 1e-9)
    first = np.cross(along, [1.0, 0.0, 0.0] if abs(along[0]) < 0.9 else [0.0, 1.0, 0.0])
    first /= np.linalg.norm(first)
    second = np.cross(along, first)
    ring3 = zone["radius_mm"] * (np.outer(np.cos(turn), first) + np.outer(np.sin(turn), second))
    return [start + ring3, end + ring3, *[np.stack([start + ring3[n], end + ring3[n]]) for n in (0, 6, 12, 18)]]


def _lever(results: Results, position: int, ink: Ink) -> list[Trace]:
    made = lever_points(results)
    if "pivot" not in made:
        return []
    shown = {*key_positions(results), position}
    return [
        line([made["pivot"], made["end"][p], made["grip"][p]], ink.ink if p == position else ink.pale,
             width=8.0 if p == position else 4.0, name=f"lever at {100 * results.stroke.stroke[p]:.0f} %")
        for p in sorted(shown)
    ]  # fmt: skip


def _path(results: Results, ink: Ink) -> list[Trace]:
    """The handle path in runs of pull, push and neither, each with its hue and its dash."""
    s = results.stroke
    kinds = [way(float(v)) for v in s.pull]
    colours = {"pull": ink.pull, "push": ink.push, "neither": ink.grey}
    traces, first = [], 0
    for n in range(1, len(kinds) + 1):
        if n == len(kinds) or kinds[n] != kinds[first]:
            kind = kinds[first]
            run = s.handle_mm[first : min(n + 1, len(kinds))]
            traces.append(line(run, colours[kind], width=7.0, dash=DASHES[kind], name=kind))
            first = n
    return traces


def _person(person: Any, position: int, ink: Ink, *, inked: bool) -> list[Trace]:
    traces = []
    for chain in BONES:
        points = [np.asarray(person.points_mm[j])[position] for j in chain if j in person.points_mm]
        if len(points) > 1 and np.isfinite(points).all():
            traces.append(line(points, ink.ink if inked else ink.grey, width=5.0 if inked else 3.0,
                               dash="dash" if person.women else "solid", name=person.name))  # fmt: skip
    return traces
