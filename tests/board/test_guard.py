"""What the board refuses: foreign hosts and origins, large and hostile uploads, paths that lead out."""

import base64
import importlib.util
import io
import zipfile
from pathlib import Path

import pytest

from ergo.board.draft import file_problems
from ergo.board.opening import bring, in_folder, open_in_folder, save_into
from ergo.board.store import Store, new_key
from ergo.errors import StudyError

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)


@pytest.fixture
def client(board):
    client = board.app.server.test_client()
    host = board.address.removeprefix("http://")

    def ask(path, *, method="GET", **headers):
        return client.open(path, method=method, headers={"Host": host, **headers}, json={} if method == "POST" else None)

    return ask


@pytest.fixture
def work(tmp_path):
    return Store(tmp_path / "works").work(new_key())


def sent(content):
    return "data:application/octet-stream;base64," + base64.b64encode(content).decode()


def test_a_foreign_host_is_refused(client):
    assert client("/").status_code == 200
    for host in ("evil.example", "evil.example:80", "127.0.0.1.evil.example", "127.0.0.1:1"):
        assert client("/", Host=host).status_code == 403


def test_a_foreign_origin_may_not_post(client, board):
    assert client("/_dash-update-component", method="POST", Origin="http://evil.example").status_code == 403
    assert client("/_dash-update-component", method="POST", Origin="null").status_code == 403
    assert client("/_dash-update-component", method="POST", Origin=board.address).status_code != 403


def test_headers_keep_the_page_to_itself(client):
    got = client("/").headers
    policy = got["Content-Security-Policy"]
    assert "unsafe-eval" not in policy
    script = next(p for p in policy.split(";") if p.strip().startswith("script-src"))
    assert "unsafe-inline" not in script
    assert "default-src 'none'" in policy
    assert "frame-ancestors 'none'" in policy
    assert got["X-Content-Type-Options"] == "nosniff"
    assert got["Referrer-Policy"] == "no-referrer"


def test_a_body_over_the_limit_is_refused(board):
    client = board.app.server.test_client()
    host = board.address.removeprefix("http://")
    body = b"{" + b" " * (7 * 1024 * 1024)
    got = client.post("/_dash-update-component", data=body, headers={"Host": host, "Content-Type": "application/json"})
    assert got.status_code == 413


@pytest.mark.parametrize("path", ["/assets/../pyproject.toml", "/assets/%2e%2e/%2e%2e/pyproject.toml", "/assets/..%2fx",
                                  "/_dash-component-suites/dash/../../../etc/passwd",
                                  "/_dash-component-suites/x/%2e%2e%2f%2e%2e%2fetc/passwd"])  # fmt: skip
def test_paths_do_not_lead_out(client, path):
    got = client(path)
    assert got.status_code in (404, 308)
    assert b"root:" not in got.data
    assert b"[project]" not in got.data


def test_debug_is_off(board):
    assert not board.app.server.debug
    assert board.app._dev_tools.get("ui", False) in (False, None)


@pytest.mark.parametrize("name", ["../x.toml", "a/b.toml", "..\\x.toml", "x.exe", ".toml", "x.toml\0.csv", "a" * 200 + ".toml"])
def test_names_of_uploads_must_be_plain(work, name):
    with pytest.raises(StudyError):
        bring(work, {name: sent(b"[study]\n")}, "tab")
    assert work.empty


def test_a_zip_bomb_named_toml_is_not_unpacked(work):
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as made:
        made.writestr("big", b"0" * 50_000_000)
    with pytest.raises(StudyError, match=r"is not UTF-8 text|is not a TOML file"):
        bring(work, {"bomb.toml": sent(packed.getvalue())}, "tab")
    assert work.empty


def test_an_upload_over_a_megabyte_is_refused_again_on_the_server(work):
    with pytest.raises(StudyError, match="is too large"):
        bring(work, {"big.toml": sent(b"# " + b"x" * 1_000_001)}, "tab")


@pytest.mark.parametrize("content", [b"a = " + b"[" * 20_000, b"[study\n", b"\xff\xfe\x00", b"lever = 3\n[[lever]]\n"])
def test_broken_toml_is_a_sentence(work, content):
    with pytest.raises(StudyError, match=r"broken\.toml"):
        bring(work, {"broken.toml": sent(content)}, "tab")


@pytest.mark.parametrize("text", ["bench = 3", "lever = []", "zones = {}", "study = [[1]]", "operators = 'x'", "load = 1",
                                  "variants = 'x'", "[lever]\npivot_mm = 'a'", "[path]\nfile = {}", "zones = [1]",
                                  "[linkage]\nkind = []", "[operators]\npopulation = 3"])  # fmt: skip
def test_toml_that_is_no_study_opens_with_problems_and_can_be_shown(work, text):
    from ergo.board.callbacks.values import state_of
    from ergo.board.layouts import bench

    bring(work, {"odd.toml": sent(text.encode())}, "tab")
    assert work.draft.problems
    assert state_of(work, 0, "rest")["problem_list"]
    assert bench.page(work.draft) is not None


@pytest.mark.parametrize("name", ["../secret.csv", "/etc/passwd", "~/x.csv", "a/../b.csv", "..", "missing.csv"])
def test_a_study_cannot_name_files_outside_its_own(work, name):
    (work.place / "files").mkdir(parents=True)
    (work.place / "secret.csv").write_text("slide_mm, force_n\n0,1\n1,2\n")
    for data in ({"load": {"kind": "table", "file": name}}, {"operators": {"population": name + ".csv"}}):
        assert file_problems(data, work.files)


def test_a_link_in_the_folder_leads_nowhere(tmp_path, work):
    folder = tmp_path / "folder"
    folder.mkdir()
    outside = tmp_path / "outside.toml"
    outside.write_text('[study]\ntitle = "secret"\n')
    (folder / "link.toml").symlink_to(outside)
    assert in_folder(folder) == {}
    with pytest.raises(StudyError):
        open_in_folder(work, folder, "link.toml", "tab")
    with pytest.raises(StudyError):
        save_into(folder, "link.toml", "x")
    assert "secret" in outside.read_text()


@pytest.mark.browser
def test_a_file_of_100_mb_never_leaves_the_browser(board, new_page, tmp_path):
    big = tmp_path / "big.toml"
    with big.open("wb") as out:
        out.truncate(100_000_000)
    page = new_page()
    page.goto(board.address)
    page.locator(".studies button").first.wait_for()
    posts = []
    page.on("request", lambda r: posts.append(len(r.post_data or "")))
    page.locator("#upload input[type=file]").set_input_files(big)
    page.locator("#upload-says", has_text="big.toml is over 1 MB").wait_for()
    assert max(posts, default=0) < 1_000_000


@pytest.mark.browser
def test_hostile_words_are_shown_as_words(board, new_page, tmp_path):
    title = '<img src=x onerror="window.hit=1"><script>window.hit=1</script>'
    text = (Path(__file__).parents[2] / "datasets" / "studies" / "gasket_punch.toml").read_text(encoding="utf-8")
    hostile = tmp_path / "hostile.toml"
    hostile.write_text(text.replace('title = "Gasket punch"', f"title = '{title}'").replace(
        'name = "punch"', f"name = '{title}'"), encoding="utf-8")  # fmt: skip
    page = new_page()
    page.goto(board.address)
    page.locator("#upload input[type=file]").set_input_files(hostile)
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    assert page.locator("#study-title").inner_text() == title
    assert page.evaluate("window.hit") is None
    assert page.locator("img[src=x]").count() == 0
