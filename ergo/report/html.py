"""The report as one HTML file that needs nothing else: drawings, faces and styles are inside it."""

import base64
from html import escape

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.ratings_view import ratings_drawing, rows
from ergo.pictures.sheet import Drawing, plain
from ergo.report.blocks import Block, Claim, Picture, Points, Report, Rows, Words
from ergo.report.claims import listed
from ergo.report.compile import FOOTER
from ergo.sources import folder

FACES = (("Regular", 400, "normal"), ("SemiBold", 600, "normal"), ("Italic", 400, "italic"))
STYLE = """
:root{--ink:#16181b;--grey:#55595f;--pale:#bdbfc2}
html{background:#fff;color:var(--ink);font:16px/1.45 'Pullward Sans','DejaVu Sans',sans-serif}
body{max-width:56rem;margin:2rem auto;padding:0 1rem;overflow-wrap:anywhere}
h1{font-size:2rem;line-height:1.15;margin:.2rem 0}
h2{font-size:1.3rem;margin:2.4rem 0 .6rem}h3{font-size:1.05rem;margin:1.6rem 0 .4rem}
.kicker,figcaption,caption,dt{color:var(--grey);font-size:.88rem;text-align:left}
.verdict{border:1px solid var(--grey);padding:.8rem 1rem;font-weight:600;font-size:1.15rem}.short{border:3px solid var(--ink)}
table{border-collapse:collapse;width:100%;font-size:.86rem;margin:.6rem 0 1.2rem}
caption{padding:.3rem 0}
th,td{text-align:left;vertical-align:top;padding:.22rem .4rem;border-bottom:1px solid var(--pale)}
thead th{border-bottom:2px solid var(--ink)}
.wide{overflow-x:auto}figure{margin:1.2rem 0}svg{max-width:100%;height:auto}
.claim{border-left:2px solid var(--pale);padding:.1rem 0 .1rem .9rem;margin:.8rem 0}
.claim.below{border-left:5px solid var(--ink)}
.claim.below p{font-weight:600}
dl{display:grid;grid-template-columns:6rem 1fr;gap:.1rem .6rem;font-size:.88rem;margin:.3rem 0}dd{margin:0}
ul.boxes{list-style:'\\2610  '}@media print{body{margin:0;max-width:none}figure,.claim{break-inside:avoid}}
"""


def page(made: Report, version: str) -> bytes:
    """Return the report as an HTML file."""
    short = "" if made.meets else " short"
    signatures = "".join(
        f'<tr><th scope="row">{escape(name)}</th><td dir="auto">{escape(value)}</td><td></td><td></td></tr>'
        for name, value in made.facts
    )
    parts = [
        f'<p class="kicker">Operator report on a hand lever</p><h1 dir="auto">{escape(made.title)}</h1>',
        f'<p dir="auto">{escape(made.subtitle)}</p>' if made.subtitle else "",
        f'<p class="verdict{short}" dir="auto">{escape(made.verdict)}</p>',
        *(_block(b, "h2") for b in made.opening),
        '<table><thead><tr><th scope="col"></th><th scope="col">name</th><th scope="col">signature</th>'
        f'<th scope="col">date</th></tr></thead><tbody>{signatures}</tbody></table>',
    ]
    for number, section in enumerate(made.sections, 1):
        parts.append(f"<section><h2>{number} {escape(section.title)}</h2>")
        parts += [_block(b, "h3") for b in section.blocks]
        parts.append("</section>")
    foot = f'<footer class="kicker">{escape(FOOTER + version)}</footer>'
    head = (
        '<!doctype html>\n<html lang="en"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width">'
        "<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'unsafe-inline'; font-src data:\">"
        f"<title>{escape(made.title)}</title><style>{_faces()}{STYLE}</style></head><body><main>"
    )
    return "\n".join([head, *(p for p in parts if p), "</main>", foot, "</body></html>\n"]).encode()


def _faces() -> str:
    found = []
    for name, weight, style in FACES:
        data = base64.b64encode(
            (folder("assets") / "web" / "fonts" / f"PullwardSans-{name}.woff2").read_bytes()
        ).decode()
        found.append(
            f"@font-face{{font-family:'Pullward Sans';font-weight:{weight};font-style:{style};"
            f"src:url(data:font/woff2;base64,{data}) format('woff2')}}"
        )
    return "".join(found)


def _block(block: Block, heading: str) -> str:
    if isinstance(block, Words):
        tag = heading if block.strong else "p"
        return f'<{tag} dir="auto">{escape(block.text)}</{tag}>'
    if isinstance(block, Points):
        items = "".join(f'<li dir="auto">{escape(t)}</li>' for t in block.items)
        return f"<ul{' class=' + chr(34) + 'boxes' + chr(34) if block.boxes else ''}>{items}</ul>"
    if isinstance(block, Rows):
        return table(block)
    if isinstance(block, Claim):
        return _claim(block)
    return _picture(block)


def table(block: Rows) -> str:
    """Return a table as HTML."""
    head = "".join(f'<th scope="col">{escape(c)}</th>' for c in block.columns)
    body = "".join(
        "<tr>" + "".join(f'<td dir="auto">{escape(plain(c))}</td>' for c in row) + "</tr>" for row in block.rows
    )
    return (
        f'<div class="wide"><table><caption>{escape(block.title)}</caption><thead><tr>{head}</tr></thead>'
        f"<tbody>{body}</tbody></table></div>"
    )


def _claim(block: Claim) -> str:
    below = " below" if block.met is False else ""
    number = block.number + (", below target" if below else "")
    pairs = (("number", number), ("interval", block.interval), ("target", block.target), ("rests on", listed(block)))
    rows_of_claim = "".join(f"<dt>{escape(k)}</dt><dd>{escape(v)}</dd>" for k, v in pairs)
    return (
        f'<div class="claim{below}"><span class="kicker">{escape(block.name)}</span><p dir="auto">{escape(block.sentence)}</p>'
        f"<dl>{rows_of_claim}</dl></div>"
    )


def _picture(block: Picture) -> str:
    twin = Rows(block.drawing.title, block.drawing.columns, block.drawing.rows)
    extra = table(twin) if block.twin else f"<details><summary>The same as a table</summary>{table(twin)}</details>"
    return f'<figure>{block.drawing.svg}<figcaption dir="auto">{escape(block.caption)}</figcaption></figure>{extra}'


def results_html(results: Results) -> str:
    """Return results as a notebook shows them: verdict, ratings drawn and as a table."""
    drawing: Drawing = ratings_drawing(results, theme.PRINT)
    columns = ("rating", "value", "interval", "target", "met", "reason")
    title = plain(results.study["study"]["title"], 160)
    variant = f", variant {plain(results.variant, 80)}" if results.variant else ""
    return (
        f'<section><h3 dir="auto">{escape(title + variant)}</h3><p dir="auto"><strong>{escape(results.reasons[0])}</strong></p>'
        f"{drawing.svg}{table(Rows('Ratings', columns, tuple(rows(results))))}</section>"
    )
