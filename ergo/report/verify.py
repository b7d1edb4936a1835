"""Check a bundle: do its files still say what its study gives?"""

import hashlib
import json
import zipfile
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ergo import __version__
from ergo.errors import DataError, StudyError
from ergo.evaluation.results import Results
from ergo.evaluation.run import evaluate
from ergo.report.bundle import CHECKSUMS, ORDER, STUDY, Order, bundle
from ergo.study.model import Study
from ergo.study.reader import read

LARGEST = 200_000_000
MOST_SHOWN = 20
Tell = Callable[[float, str], None]


@dataclass(frozen=True)
class Finding:
    """What the check found: `matches` when every file is what the study gives, else what differs."""

    matches: bool
    checked: int
    differences: tuple[str, ...]
    made_with: str

    def sentence(self) -> str:
        """Return the finding in one sentence."""
        if self.matches:
            return f"The report matches: all {self.checked} files are what the study gives with pullward {__version__}."
        count = len(self.differences)
        return f"The report does not match: {count} difference{'s' if count != 1 else ''} in {self.checked} files."


def contents(place: str | Path) -> dict[str, bytes]:
    """Return the files of a bundle, a folder or a zip, by name.

    Raises
    ------
    DataError
        If it cannot be read, is too large or is no bundle.
    """
    path = Path(place)
    try:
        if path.is_file():
            with zipfile.ZipFile(path) as made:
                if sum(i.file_size for i in made.infolist()) > LARGEST:
                    raise DataError(f"{path}: is larger than a bundle can be")
                found = {i.filename: made.read(i) for i in made.infolist() if not i.is_dir()}
        else:
            names = [p for p in sorted(path.rglob("*")) if p.is_file()]
            if sum(p.stat().st_size for p in names) > LARGEST:
                raise DataError(f"{path}: is larger than a bundle can be")
            found = {p.relative_to(path).as_posix(): p.read_bytes() for p in names}
    except (OSError, zipfile.BadZipFile) as error:
        msg = f"{path}: cannot be read as a bundle: {getattr(error, 'strerror', None) or error}"
        raise DataError(msg) from error
    missing = [name for name in (STUDY, ORDER, CHECKSUMS) if name not in found]
    if missing:
        msg = f"{path}: is not a bundle of a report, it has no {', '.join(missing)}"
        raise DataError(msg)
    return found


def verify(place: str | Path, tell: Tell = lambda share, what: None) -> Finding:
    """Recompute a bundle from its study and say whether every file still matches.

    Parameters
    ----------
    place : str or Path
        Folder or zip that `pullward report --bundle` wrote.
    tell : callable
        Called with a share 0..1 and a word as the work goes on.

    Returns
    -------
    Finding

    Raises
    ------
    DataError
        If it is no bundle.
    """
    tell(0.0, "reading")
    found = contents(place)
    made_with = _made_with(found)
    try:
        wanted = _made_again(found, tell)
    except (StudyError, KeyError) as error:
        return Finding(False, len(found), (f"{STUDY}: {str(error).splitlines()[0]}",), made_with)
    named = _differences(found, wanted)
    seen = {line.split(":")[0] for line in named}
    differences = [*(line for line in _changed_since(found) if line.split(":")[0] not in seen), *named]
    if differences and made_with != __version__:
        differences.append(
            f"made with pullward {made_with}, checked with {__version__}: another version may differ throughout"
        )
    tell(1.0, "done")
    return Finding(not differences, len(found), tuple(differences), made_with)


def _made_with(found: dict[str, bytes]) -> str:
    try:
        return str(json.loads(found[ORDER]).get("pullward", "unknown"))
    except (ValueError, AttributeError):
        return "unknown"


def _made_again(found: dict[str, bytes], tell: Tell) -> dict[str, bytes]:
    """Evaluate the bundled study afresh and return the whole bundle made from it."""
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        for name in (n for n in found if n == STUDY or (n.endswith(".csv") and not n.startswith("tables/"))):
            target = (Path(folder) / name).resolve()
            if not target.is_relative_to(Path(folder).resolve()):
                msg = f"{name}: points outside the bundle"
                raise DataError(msg)
            target.parent.mkdir(parents=True, exist_ok=True)
            target.write_bytes(found[name])
        study = read(Path(folder) / STUDY)
        order = Order.from_json(found[ORDER])
        tell(0.1, "judging again")
        results = evaluated(study, order.variant)
        against = [evaluated(study, name) for name in order.against]
        tell(0.8, "writing again")
        return bundle(results, study, order, against)


def evaluated(study: Study, variant: str) -> Results:
    """Return the results of a study, or of one of its variants; KeyError for a variant that it does not have."""
    return evaluate(study.variant(variant) if variant else study)


def _changed_since(found: dict[str, bytes]) -> list[str]:
    """Return the files that are no longer those whose checksums the bundle states."""
    stated = dict(
        line.split("  ", 1)[::-1] for line in found[CHECKSUMS].decode(errors="replace").splitlines() if "  " in line
    )
    return [
        f"{name}: is not the file that {CHECKSUMS} states"
        for name in sorted(stated.keys() & found.keys())
        if hashlib.sha256(found[name]).hexdigest() != stated[name]
    ]


def _differences(found: dict[str, bytes], wanted: dict[str, bytes]) -> list[str]:
    said = [f"{name}: is missing" for name in sorted(wanted.keys() - found.keys())]
    said += [f"{name}: does not belong to the bundle" for name in sorted(found.keys() - wanted.keys())]
    for name in sorted(found.keys() & wanted.keys()):
        if found[name] != wanted[name]:
            said.append(f"{name}: {_where(name, found[name], wanted[name])}")
    if len(said) > MOST_SHOWN:
        said = [*said[:MOST_SHOWN], f"and {len(said) - MOST_SHOWN} more"]
    return said


def _where(name: str, found: bytes, wanted: bytes) -> str:
    """Return the first place where two files differ, in words."""
    if name.endswith(".json"):
        try:
            place = _first_difference("", json.loads(found), json.loads(wanted))
        except ValueError:
            return "is no longer JSON"
        if place:
            return place
    if name.endswith((".pdf", ".xlsx")):
        return "is not what the study gives"
    lines = zip(found.split(b"\n"), wanted.split(b"\n"), strict=False)
    number = next((n for n, (a, b) in enumerate(lines, 1) if a != b), None)
    return f"line {number} is not what the study gives" if number else "is longer or shorter than the study gives"


def _first_difference(path: str, found: Any, wanted: Any) -> str:
    if isinstance(found, dict) and isinstance(wanted, dict):
        for key in sorted(found.keys() | wanted.keys()):
            said = _first_difference(f"{path}.{key}".lstrip("."), found.get(key), wanted.get(key))
            if said:
                return said
        return ""
    if isinstance(found, list) and isinstance(wanted, list) and len(found) == len(wanted):
        return next((s for n, (a, b) in enumerate(zip(found, wanted, strict=True))
                     if (s := _first_difference(f"{path}[{n}]", a, b))), "")  # fmt: skip
    return "" if found == wanted else f"{path} says {found!r}, the study gives {wanted!r}"
