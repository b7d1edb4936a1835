"""A bundle made from a study, and the check that finds one changed digit in any of its files."""

import hashlib
import io
import json
import re
import zipfile

import pytest

from ergo.cli.main import main
from ergo.errors import DataError
from ergo.evaluation.run import evaluate
from ergo.report import verify as verifying
from ergo.report.bundle import CHECKSUMS, Order, bundle, study_files, zipped
from ergo.report.files import write_folder
from ergo.sources import folder
from ergo.study.reader import read

ORDER = Order(variant="longer", against=("",), date=(2026, 3, 1))


@pytest.fixture(scope="module")
def study():
    shipped = read(folder("datasets") / "studies" / "gasket_punch.toml")
    return shipped.with_values({"operators.count": 60, "study.positions": 11})


@pytest.fixture(scope="module")
def judged(study):
    return {"longer": evaluate(study.variant("longer")), "": evaluate(study)}


@pytest.fixture(scope="module")
def files(study, judged):
    return bundle(judged["longer"], study, ORDER, [judged[""]])


@pytest.fixture
def once(monkeypatch, judged):
    """The evaluation takes its time; the checks of single files share one."""
    monkeypatch.setattr(verifying, "evaluated", lambda study, variant: judged[variant])


def test_a_bundle_holds_all_that_is_needed(files):
    assert {"study.toml", "results.json", "report.pdf", "report.html", "report.md", "tables/stroke.csv",
            "tables/results.xlsx", "drawings/machine.svg", CHECKSUMS} <= set(files)  # fmt: skip


def test_checksums_are_those_of_the_files(files):
    for line in files[CHECKSUMS].decode().splitlines():
        digest, name = line.split("  ")
        assert hashlib.sha256(files[name]).hexdigest() == digest


def test_the_bundled_study_is_the_study(files, study, tmp_path):
    (tmp_path / "study.toml").write_bytes(files["study.toml"])
    assert read(tmp_path / "study.toml").digest() == study.digest()


def test_an_untouched_bundle_matches_when_judged_again(files, tmp_path):
    write_folder(tmp_path / "b", files, CHECKSUMS)
    finding = verifying.verify(tmp_path / "b")
    assert finding.differences == ()
    assert finding.matches


def test_a_zip_is_checked_like_a_folder(files, tmp_path, once):
    (tmp_path / "b.zip").write_bytes(zipped(files))
    assert verifying.verify(tmp_path / "b.zip").matches
    assert zipped(files) == zipped(files)


def changed_digit(content):
    """The same bytes with one digit changed, as near the middle as there is one."""
    places = [m.start() for m in re.finditer(rb"\d", content)]
    at = min(places, key=lambda p: abs(p - len(content) // 2))
    other = b"7" if content[at : at + 1] != b"7" else b"3"
    return content[:at] + other + content[at + 1 :]


NAMES = ("results.json", "report.pdf", "report.html", "report.md", "tables/stroke.csv", "tables/people.csv",
         "tables/ratings.csv", "tables/numbers.csv", "tables/results.xlsx", "drawings/machine.svg",
         "drawings/operators.svg", "drawings/stroke.svg", "drawings/left_out.svg", "drawings/left_out_strip.svg",
         "drawings/ratings.svg", "bundle.json", CHECKSUMS)  # fmt: skip


def test_the_list_of_files_is_whole(files):
    assert set(NAMES) | {"study.toml"} == set(files)


@pytest.mark.parametrize("name", NAMES)
def test_one_changed_digit_is_found(files, tmp_path, once, name):
    write_folder(tmp_path / "b", {**files, name: changed_digit(files[name])}, CHECKSUMS)
    finding = verifying.verify(tmp_path / "b")
    assert not finding.matches
    assert any(line.startswith(f"{name}:") for line in finding.differences)


def test_one_changed_digit_of_the_study_is_found(files, tmp_path):
    study = files["study.toml"].replace(b"force_n = 420.0", b"force_n = 421.0")
    assert study != files["study.toml"]
    write_folder(tmp_path / "b", {**files, "study.toml": study}, CHECKSUMS)
    finding = verifying.verify(tmp_path / "b")
    assert not finding.matches
    assert any(line.startswith("results.json:") for line in finding.differences)


def test_a_changed_number_with_mended_checksums_is_still_found(files, tmp_path, once):
    results = json.loads(files["results.json"])
    results["ratings"]["served"]["value"] = 99.0
    content = (json.dumps(results, sort_keys=True, indent=1, ensure_ascii=False) + "\n").encode()
    digests = (hashlib.sha256(files["results.json"]).hexdigest(), hashlib.sha256(content).hexdigest())
    mended = files[CHECKSUMS].replace(digests[0].encode(), digests[1].encode())
    write_folder(tmp_path / "b", {**files, "results.json": content, CHECKSUMS: mended}, CHECKSUMS)
    finding = verifying.verify(tmp_path / "b")
    assert any("ratings.served.value says 99.0" in line for line in finding.differences)


def test_missing_and_foreign_files_are_named(files, tmp_path, once):
    rest = {k: v for k, v in files.items() if k != "report.pdf"} | {"extra.txt": b"x"}
    write_folder(tmp_path / "b", rest, CHECKSUMS)
    found = verifying.verify(tmp_path / "b").differences
    assert "report.pdf: is missing" in found
    assert "extra.txt: does not belong to the bundle" in found


def test_what_is_no_bundle_is_refused(tmp_path):
    with pytest.raises(DataError, match="is not a bundle"):
        verifying.verify(tmp_path)
    (tmp_path / "x.zip").write_bytes(b"no zip")
    with pytest.raises(DataError, match="cannot be read"):
        verifying.verify(tmp_path / "x.zip")


def test_a_zip_that_unpacks_too_large_is_refused(tmp_path, monkeypatch):
    monkeypatch.setattr(verifying, "LARGEST", 1000)
    out = io.BytesIO()
    with zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as made:
        made.writestr("study.toml", b"0" * 100_000)
    (tmp_path / "b.zip").write_bytes(out.getvalue())
    with pytest.raises(DataError, match="larger than a bundle can be"):
        verifying.verify(tmp_path / "b.zip")


def test_a_file_that_points_outside_is_refused(files, tmp_path):
    (tmp_path / "b.zip").write_bytes(zipped({**files, "../../evil.csv": b"x"}))
    with pytest.raises(DataError, match="points outside"):
        verifying.verify(tmp_path / "b.zip")


def test_a_csv_of_the_study_goes_with_it(tmp_path):
    (tmp_path / "ratio.csv").write_text("lever_deg,slide_mm\n0,0\n30,10\n60,20\n")
    text = (
        "[lever]\npivot_mm = [150, 260, 1120]\nlength_mm = 300\nstart_deg = 0\nend_deg = 60\n"
        '[linkage]\nkind = "table"\nfile = "ratio.csv"\n[load]\nkind = "constant"\nforce_n = 100\n'
    )
    (tmp_path / "s.toml").write_text(text)
    found = study_files(read(tmp_path / "s.toml"))
    assert found["ratio.csv"] == (tmp_path / "ratio.csv").read_bytes()


def test_the_command_writes_report_bundle_and_cad(tmp_path, capsys):
    words = ["report", "gasket_punch", "--operators", "50", "--against", "longer", "--date", "2026-03-01",
             "-o", str(tmp_path / "r.pdf"), "--bundle", str(tmp_path / "b.zip"), "--cad", str(tmp_path / "cad")]  # fmt: skip
    assert main(words) == 0
    assert (tmp_path / "r.pdf").read_bytes().startswith(b"%PDF")
    assert sorted(p.name for p in tmp_path.iterdir()) == ["b.zip", "cad", "r.pdf"]
    assert main(["verify", str(tmp_path / "b.zip")]) == 0
    assert "The report matches" in capsys.readouterr().out


@pytest.mark.parametrize(
    ("words", "code", "said"),
    [
        (["-o", "r.doc"], 2, ".pdf, .html or .md"),
        (["-o", "r.pdf", "--date", "yesterday"], 2, "is not a date"),
        (["-o", "r.pdf", "--against", "nowhere"], 2, "no variant of that name"),
        (["-o", "missing/r.pdf"], 3, "cannot be written"),
    ],
)
def test_what_is_wrong_is_one_sentence(tmp_path, monkeypatch, capsys, words, code, said):
    monkeypatch.chdir(tmp_path)
    assert main(["report", "gasket_punch", "--operators", "50", *words]) == code
    assert said in capsys.readouterr().err
    assert list(tmp_path.iterdir()) == []
