"""The report's content, from results alone: no claim without its number, no number without its unit."""

from collections.abc import Sequence

import numpy as np

from ergo.evaluation.results import Results
from ergo.pictures.ratings_view import label, ordered
from ergo.pictures.ribbon import ribbon_rows
from ergo.pictures.sheet import figure, plain, quantity
from ergo.report import inputs
from ergo.report.alternatives import comparison
from ergo.report.blocks import Block, Picture, Points, Report, Rows, Section, Words
from ergo.report.claims import argument, hardest, said
from ergo.report.drawings import Drawings

LONGEST_TITLE = 160
STROKE_CAPTION = (
    "Needed and allowed hand force. Bands from P5 to P95, women dashed, men solid, after what repetition leaves; thin lines "
    "end where their method does."
)
STRIP_CAPTION = "Share of operators lost at each position of the stroke, stacked by limit."
ONLY_DRAWS = "No rating's 95 % interval holds its target: another draw of people is not likely to change the verdict."
NOT_VARIED = (
    "Recalled and derived numbers were not varied in this evaluation, so this report cannot say which of them would change "
    "the verdict."
)


def report(results: Results, drawings: Drawings, against: Sequence[Results] = (),
           date: tuple[int, int, int] | None = None) -> Report:  # fmt: skip
    """Return the whole report.

    Parameters
    ----------
    results : Results
        What the report is about.
    drawings : Drawings
        Its drawings, in the inks of the face that shows them.
    against : sequence of Results
        Placements to compare it with.
    date : (year, month, day) or None
        Date to print; left for the signatures when None.
    """
    head = results.study["study"]
    title = plain(head["title"], LONGEST_TITLE) or "Untitled lever"
    variant = f"Variant: {plain(results.variant, LONGEST_TITLE)}" if results.variant else ""
    sections = (
        Section("Purpose and scope", _purpose(results)),
        Section("Who the operators are", _people(results, drawings), fresh_page=True),
        Section("The machine", _machine(results, drawings), fresh_page=True),
        Section("The handle path", _path(results, drawings)),
        Section("The argument", _argument(results, drawings)),
        Section("Alternatives tried", _alternatives(results, against)),
        Section("What would change the verdict", _flips(results)),
        Section("Residual risks and cautions", _risks(results)),
        Section("What to verify with real operators", _trial(results)),
        Section("Inputs in full", (inputs.input_rows(results),)),
        Section("Methods, their range and status", _methods(results)),
        Section("Sources", (inputs.bibliography_rows(results),)),
        Section("Manifest", _manifest(results)),
        Section("Appendix: the stroke, position by position", (_stroke_rows(results),), fresh_page=True),
        Section("Appendix: numbers recalled and not checked", (inputs.recalled_rows(results),)),
    )
    return Report(title, variant, results.meets, results.reasons[0], _facts(results), _opening(results, drawings), sections,
                  tuple(results.cautions), date, drawings.all())  # fmt: skip


def _facts(results: Results) -> tuple[tuple[str, str], ...]:
    head = results.study["study"]
    return (
        ("Revision", plain(head.get("revision", ""), 80) or "not given"),
        ("Prepared by", plain(head.get("prepared_by", ""), 80)),
        ("Reviewed by", plain(head.get("reviewed_by", ""), 80)),
    )


def _opening(results: Results, drawings: Drawings) -> tuple[Block, ...]:
    """Page one: what falls short comes first, in words."""
    short = [results.ratings[n] for n in ordered(results) if not results.ratings[n].met]
    found: list[Block] = [Words(text) for text in results.reasons[1:4]]
    if short:
        lines = "; ".join(f"{label(r.name)} {figure(r.value, 1)} of 100, target {figure(r.target, 1)}" for r in short)
        found = [Words(f"Below target: {lines}.", strong=True), *found]
    caption = (
        "Ratings, 0 to 100: bar to the value, tick at the target, whisker for the 95 % interval. A solid square marks a "
        "rating below its target."
    )
    found.append(Picture(drawings.ratings, caption))
    return tuple(found)


def _purpose(results: Results) -> tuple[Block, ...]:
    study = results.study
    travel = float(results.stroke.slide_mm[-1] - results.stroke.slide_mm[0])
    unit = "°" if study["linkage"]["kind"] == "shaft" else "mm"
    p = hardest(results)
    first = (
        "This report asks whether one hand lever is in the right place for the people who will work it: whether they reach it, "
        "whether the working stroke is a pull, whether they can give the force as often as the job repeats, whether hand "
        "and forearm stay clear, and what happens when the load lets go."
    )
    second = (
        f"The linkage is of the kind '{study['linkage']['kind']}' and its driven part travels {quantity(travel, unit, 1)}; "
        f"the load is of the kind '{study['load']['kind']}'. The largest hand force it asks for is "
        f"{quantity(results.stroke.demand_n[p], 'N')}, at {quantity(100 * results.stroke.stroke[p], '%')} of the stroke."
    )
    third = "It covers this lever, these operators and this duty only. What it leaves out is said under residual risks."
    return Words(first), Words(second), Words(third)


def _people(results: Results, drawings: Drawings) -> tuple[Block, ...]:
    caption = (
        f"{drawings.operators.title}: the position that loses most people. Women dashed, men solid, in the easiest posture that "
        "carries the load; the curves are the furthest the hand gets from that stance."
    )
    return (*inputs.people_blocks(results), Picture(drawings.operators, caption, twin=True))


def _machine(results: Results, drawings: Drawings) -> tuple[Block, ...]:
    dims = drawings.machine
    return (
        Picture(dims, f"{dims.title}. Millimetres. Lever in outline at the start, faint at the middle and the end. "
                      "Hazard zones are hatched one way, obstacles both ways."),
        Rows("Dimensions that the study sets", dims.columns, dims.rows, (0.42, 0.3, 0.28)),
    )  # fmt: skip


def _path(results: Results, drawings: Drawings) -> tuple[Block, ...]:
    text = (
        "The ribbon in the drawing above is the handle path: its width is the needed hand force, open chevrons mark a pull "
        "toward the operator, filled ones a push, double ticks neither. The same in numbers:"
    )
    columns = ("stroke", "right, mm", "away, mm", "up, mm", "way of the hand", "needed force")
    return (
        Words(text),
        Rows("Handle path", columns, tuple(ribbon_rows(results))),
    )


def _argument(results: Results, drawings: Drawings) -> tuple[Block, ...]:
    found: list[Block] = [
        Words("Each claim below stands with its number, the interval it lies in, its target, and the sources it rests on with "
              "the weakest status among their numbers.")
    ]  # fmt: skip
    for name, title, claims in argument(results):
        found.append(Words(title, strong=True))
        found += claims
        if name == "force":
            found.append(Picture(drawings.stroke, STROKE_CAPTION))
        if name == "served":
            found.append(
                Picture(drawings.people, "One dot an operator drawn; hollow are served, marked ones are left out.")
            )
            found.append(Picture(drawings.strip, STRIP_CAPTION, twin=True))
    return tuple(found)


def _alternatives(results: Results, against: Sequence[Results]) -> tuple[Block, ...]:
    if against:
        return tuple(comparison(results, against))
    names = [plain(v["name"], 60) for v in results.study.get("variants", ())]
    if names:
        return (
            Words(
                f"The study holds {len(names)} variant(s) that this report was not asked to compare: {', '.join(names)}."
            ),
        )
    return (
        Words("No alternative was compared in this report, so it cannot say why this placement rather than another."),
    )


def _flips(results: Results) -> tuple[Block, ...]:
    """What would change the verdict: what the results say, then the ratings closest to their targets."""
    near = []
    for name in ordered(results):
        r = results.ratings[name]
        if np.isfinite(r.target) and np.isfinite(r.low) and r.low < r.target < r.high:
            near.append(
                f"{label(name)}: its interval {figure(r.low, 1)} to {figure(r.high, 1)} holds the target "
                f"{figure(r.target, 1)}, so another draw of people could change it."
            )
    flips = said(results, "flips")
    unknown = () if flips else (Words(NOT_VARIED),)
    listed = [*flips, *near]
    if listed:
        return (Points(tuple(listed)), *unknown)
    return (Words(ONLY_DRAWS), *unknown)


def _risks(results: Results) -> tuple[Block, ...]:
    rest = tuple(results.cautions)
    short = [label(n) for n in ordered(results) if not results.ratings[n].met]
    found: list[Block] = []
    if short:
        found.append(
            Words(f"The ratings below target ({', '.join(short)}) are residual risks as the lever stands.", strong=True)
        )
    lost = float(np.mean(~np.asarray(results.crowd.served)))
    found.append(
        Words(
            f"{quantity(100 * lost, '%', 1)} of the operators drawn are not served at every position; people like them must "
            "not be assigned to this lever without a trial."
        )
    )
    found.append(Points(rest))
    return tuple(found)


def _trial(results: Results) -> tuple[Block, ...]:
    s, p = results.stroke, hardest(results)
    worst = int(np.argmin(s.served_share))
    items = [
        f"Measure the force at the handle over the stroke with a pull gauge: {quantity(s.demand_n[p], 'N')} expected at "
        f"{quantity(100 * s.stroke[p], '%')}. Measured: ________ N",
        "At least one short woman, one tall man and one person of low strength worked the whole stroke from one stance.",
        f"Watched at {quantity(100 * s.stroke[worst], '%')} of the stroke, where most people are lost: feet stay in place, "
        "no lunge.",
        "The hand was watched against every zone named in the drawing, with the glove that will be worn.",
    ]
    lets_go = results.study["load"].get("lets_go_at")
    if lets_go is not None:
        items.append(
            f"The load was let go on purpose at {quantity(100 * lets_go, '%')} of the stroke, first at low force, with a weight "
            "in place of a person; the overrun was measured. Measured: ________ mm"
        )
    items += [
        "The job was worked for a whole spell at "
        f"{figure(results.study['duty']['strokes_per_minute'], 1)} strokes a minute and the operators were asked about "
        "effort and discomfort.",
        "Guards, stops and instructions were reviewed under the local rules by the person answerable for them.",
    ]
    first = Words(
        "A calculation from population data does not replace a trial. Before release, with the operators who will work it:"
    )
    return first, Points(tuple(items), boxes=True)


def _methods(results: Results) -> tuple[Block, ...]:
    found: list[Block] = [Words("Status words:"), inputs.status_words(), inputs.tables_used(results)]
    outside = inputs.not_covered(results)
    if outside is not None:
        found += [Words("Outside a published range in this study:"), outside]
    return tuple(found)


def _manifest(results: Results) -> tuple[Block, ...]:
    text = (
        "The same study, seed and version give the same bytes: pullward verify makes this result again from a bundle."
    )
    return Words(text), inputs.manifest_rows(results)


def _stroke_rows(results: Results) -> Rows:
    s = results.stroke
    columns = ("stroke %", "lever °", "needed N", "travel mm", "ratio", "pull", "women P5 N", "women P50 N", "men P5 N",
               "men P50 N", "served %")  # fmt: skip
    rows = []
    for p in range(s.stroke.size):
        allowed = (figure(s.allowed_n[k][p]) for k in ("women_p05", "women_p50", "men_p05", "men_p50"))
        rows.append((figure(100 * s.stroke[p], 1), figure(s.lever_deg[p], 1), figure(s.demand_n[p], 1), figure(s.slide_mm[p], 2),
                     figure(s.ratio[p], 4), figure(s.pull[p], 2), *allowed, figure(100 * s.served_share[p], 1)))  # fmt: skip
    return Rows("Allowed forces are after repetition", columns, tuple(rows))
