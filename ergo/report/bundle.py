"""A report with all that is needed to check it: study, results, tables, drawings, checksums."""

import hashlib
import io
import json
import zipfile
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path, PurePosixPath

from ergo.errors import DataError
from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.report import html, markdown
from ergo.report.compile import pdf
from ergo.report.content import report
from ergo.report.drawings import draw_all
from ergo.report.tables import STILL, csv_files, xlsx_file
from ergo.study.model import Study

CHECKSUMS = "checksums.sha256"
ORDER = "bundle.json"
STUDY = "study.toml"
Tell = Callable[[float, str], None]


@dataclass(frozen=True)
class Order:
    """What a bundle was asked for: enough, with the study, to make it again."""

    variant: str = ""
    against: tuple[str, ...] = ()
    date: tuple[int, int, int] | None = None

    def to_json(self, version: str) -> bytes:
        """Return the order as a file."""
        content = {"pullward": version, "variant": self.variant, "against": list(self.against), "date": self.date}
        return (json.dumps(content, indent=1, sort_keys=True, ensure_ascii=False) + "\n").encode()

    @classmethod
    def from_json(cls, content: bytes) -> "Order":
        """Return the order in a file.

        Raises
        ------
        DataError
            If it is not an order.
        """
        try:
            made = json.loads(content)
            date = None if made["date"] is None else tuple(int(v) for v in made["date"])
            return cls(str(made["variant"]), tuple(str(n) for n in made["against"]), date)  # type: ignore[arg-type]
        except (ValueError, KeyError, TypeError) as error:
            msg = f"{ORDER}: is not the order of a bundle"
            raise DataError(msg) from error


def study_files(study: Study) -> dict[str, bytes]:
    """Return the study file and every CSV file it names, by their names inside the bundle.

    Raises
    ------
    DataError
        If a named file lies outside the study's folder or cannot be read.
    """
    found = {STUDY: study.as_toml().encode()}
    content = study.content()
    named = [part["file"] for part in content.values() if isinstance(part, Mapping) and part.get("file")]
    population = str(content["operators"]["population"])
    named += [population] if population.endswith(".csv") else []
    for name in dict.fromkeys(str(n) for n in named):
        path = PurePosixPath(name)
        if path.is_absolute() or ".." in path.parts:
            msg = f"{name}: lies outside the study's folder, so a bundle cannot hold it; move it beside the study"
            raise DataError(msg)
        try:
            found[name] = (Path(study.folder) / name).read_bytes()
        except OSError as error:
            msg = f"{name}: cannot be read: {error.strerror or error}"
            raise DataError(msg) from error
    return found


def results_json(results: Results) -> bytes:
    """Return `results.json`: sorted keys, the same bytes for the same results."""
    text = json.dumps(results.to_dict(), sort_keys=True, indent=1, allow_nan=False, ensure_ascii=False)
    return (text + "\n").encode()


def made_files(results: Results, against: Sequence[Results], order: Order, tell: Tell = lambda share, what: None
               ) -> dict[str, bytes]:  # fmt: skip
    """Return every file that follows from the results."""
    tell(0.0, "drawing")
    printed = report(results, draw_all(results, theme.PRINT), against, order.date)
    found = {f"drawings/{d.name}.svg": d.svg.encode() for d in printed.drawings}
    found["results.json"] = results_json(results)
    tell(0.3, "writing tables")
    found |= {f"tables/{name}": content for name, content in csv_files(results).items()}
    found["tables/results.xlsx"] = xlsx_file(results)
    tell(0.6, "typesetting")
    found["report.pdf"] = pdf(printed, results.version)
    found["report.html"] = html.page(printed, results.version)
    found["report.md"] = markdown.page(printed, results.version, "drawings")
    tell(1.0, "done")
    return found


def bundle(results: Results, study: Study, order: Order, against: Sequence[Results] = (),
           tell: Tell = lambda share, what: None) -> dict[str, bytes]:  # fmt: skip
    """Return every file of a bundle by name, checksums last.

    Parameters
    ----------
    results : Results
        Of `study` as `order.variant` makes it.
    study : Study
        The whole study, before any variant was chosen.
    order : Order
    against : sequence of Results
        Placements that the report compares, in the order of `order.against`.
    """
    files = {**study_files(study), **made_files(results, against, order, tell), ORDER: order.to_json(results.version)}
    return {**files, CHECKSUMS: checksums(files)}


def checksums(files: Mapping[str, bytes]) -> bytes:
    """Return SHA-256 checksums of files, one a line, as `sha256sum -c` reads them."""
    return "".join(f"{hashlib.sha256(files[name]).hexdigest()}  {name}\n" for name in sorted(files)).encode()


def zipped(files: Mapping[str, bytes]) -> bytes:
    """Return files as a zip, the same bytes for the same files."""
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as made:
        for name in sorted(files):
            made.writestr(zipfile.ZipInfo(name, STILL), files[name], zipfile.ZIP_DEFLATED)
    return out.getvalue()


def single(
    results: Results, suffix: str, against: Sequence[Results] = (), date: tuple[int, int, int] | None = None
) -> bytes:
    """Return the report alone as `.pdf`, `.html` or `.md`.

    Raises
    ------
    DataError
        For another kind of file.
    """
    made = report(results, draw_all(results, theme.PRINT), against, date)
    if suffix == ".pdf":
        return pdf(made, results.version)
    if suffix in (".html", ".htm"):
        return html.page(made, results.version)
    if suffix == ".md":
        return markdown.page(made, results.version)
    msg = f"a report is a .pdf, .html or .md file, not {suffix or 'a file without an ending'}"
    raise DataError(msg)
