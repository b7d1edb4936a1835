"""The report asked for on the board, made for real and opened with pypdf."""

import io
from pathlib import Path

import pypdf
import pytest

from ergo.evaluation.run import evaluate
from ergo.report.bundle import single
from tests.board import conftest as made
from tests.board import test_real_engine as real

small_study = real.small_study


@pytest.fixture
def engine():
    return evaluate


@pytest.fixture
def board(tmp_path, engine):
    found, server = made.serve(tmp_path, engine, make_report=lambda results, against=(): single(results, ".pdf", against))
    yield found
    server.shutdown()
    server.server_close()


@pytest.mark.browser
def test_one_click_makes_the_report_of_what_is_on_the_screen(board, new_page, small_study):
    page = new_page()
    real.open_file(page, board.address, small_study)
    served = real.steps.shown(page)
    page.get_by_role("link", name="Take away").click()
    with page.expect_download(timeout=120_000) as coming:
        page.get_by_role("button", name="Make the report").click()
    assert coming.value.suggested_filename.endswith("_report.pdf")
    pages = [p.extract_text() for p in pypdf.PdfReader(io.BytesIO(Path(coming.value.path()).read_bytes())).pages]
    text = "\n".join(pages)
    assert len(pages) > 5
    assert "Gasket punch" in pages[0]
    assert served in text
    for word in ("posture", "clearance", "let-go", "licensed"):
        assert word in text
