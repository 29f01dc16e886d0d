"""The command line: the same answers as the door, with exit codes."""

import io
import json
import os
import runpy
import subprocess
import sys
from pathlib import Path

import jsonschema
import pytest

from pycore import __version__
from pycore.__main__ import main
from tests.core.strategies import Job, answer_to, ask, demonstration, patched, report_on

ROOT = Path(__file__).resolve().parents[2]
EDITION = {
    "format": "wedgewright.edition/1",
    "id": "shop",
    "name": "Our bench",
    "states": ["mounted"],
    "rows": [{"check": "prism.vertical", "limit": {"fixed": "0.001"}, "clause": "house rule"}],
}


@pytest.fixture
def job_file(tmp_path: Path) -> Path:
    return written(tmp_path / "job.json", demonstration())


def written(path: Path, document: object) -> Path:
    path.write_text(document if isinstance(document, str) else json.dumps(document, ensure_ascii=False), "utf-8")
    return path


def run(*arguments: object, **environment: str) -> subprocess.CompletedProcess[bytes]:
    command = [sys.executable, "-m", "pycore", *map(str, arguments)]
    return subprocess.run(command, cwd=ROOT, capture_output=True, check=False, env={**os.environ, **environment})


def test_a_report_is_the_door_s_answer(job_file: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["report", str(job_file)]) == 0
    out, err = capsys.readouterr()
    assert json.loads(out) == answer_to(demonstration())
    assert err == ""


def test_a_refused_job_exits_2_with_the_refusal(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    for number, document in enumerate([patched(demonstration(), state=None), "{", "", "[1]", '{"a": NaN}', "\ufeff{"]):
        path = written(tmp_path / f"{number}.json", document)
        for more in ([], ["--text"]):
            assert main(["report", str(path), *more]) == 2
            answer = json.loads(capsys.readouterr().out)
            assert answer["format"] == "wedgewright.refusal/1"
            assert answer["errors"]
        assert number or answer["errors"] == answer_to(document)["errors"]


def test_numbers_keep_their_digits_on_the_way(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """JSON numbers pass the command line as text: 0.33 stays on the limit, also beside --text and --edition."""
    job = patched(demonstration(), readings__right__prism=[{"amount": "3", "base": "in"}, {"amount": "0.50", "base": "up"}])
    text = json.dumps(job).replace('"0.50"', "0.500000000")
    path, edition = written(tmp_path / "job.json", text), written(tmp_path / "edition.json", EDITION)
    main(["report", str(path), "--edition", str(edition)])
    checks = json.loads(capsys.readouterr().out)["verdict"]["checks"]
    assert next(check for check in checks if check["id"] == "prism.vertical")["deviation"] == 0.25


def test_an_edition_of_the_shop(tmp_path: Path, job_file: Path, capsys: pytest.CaptureFixture[str]) -> None:
    edition = written(tmp_path / "edition.json", EDITION)
    job: Job = patched(demonstration(), edition="shop", readings__right__prism=[{"amount": "0.50", "base": "up"}])
    assert main(["report", str(written(tmp_path / "other.json", job)), "--edition", str(edition)]) == 0
    assert json.loads(capsys.readouterr().out) == ask("report", job=job, editions=[EDITION])
    assert main(["report", str(job_file), "--edition", str(written(tmp_path / "bad.json", "{}"))]) == 2
    assert main(["report", str(job_file), "--edition", str(written(tmp_path / "worse.json", "{"))]) == 2
    (tmp_path / "latin.json").write_bytes(json.dumps(EDITION | {"name": "Bänk"}, ensure_ascii=False).encode("latin-1"))
    with pytest.raises(SystemExit) as ended:  # a file that is no UTF-8 text is no edition at all
        main(["report", str(job_file), "--edition", str(tmp_path / "latin.json")])
    assert ended.value.code == 1


def test_text_for_people(job_file: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["report", str(job_file), "--text"]) == 0
    assert capsys.readouterr().out == report_on(demonstration(), text=True)["text"]


def test_where_standard_output_is_no_file(job_file: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """A caller's own stream is left as it is."""
    monkeypatch.setattr(sys, "stdout", io.StringIO())
    assert main(["report", str(job_file), "--text"]) == 0
    assert "DEMO-1042" in sys.stdout.getvalue()  # type: ignore[attr-defined]


def test_files_that_are_not_there_or_not_text(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as ended:
        main(["report", str(tmp_path / "none.json")])
    assert ended.value.code == 1
    assert "none.json" in capsys.readouterr().err
    (tmp_path / "bytes.json").write_bytes(b'{"id": "\xff\xfe"}')
    assert main(["report", str(tmp_path / "bytes.json")]) == 2
    assert json.loads(capsys.readouterr().out)["errors"][0]["code"] == "json-surrogate"


def test_the_schema_is_printed(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["schema"]) == 0
    schema = json.loads(capsys.readouterr().out)
    jsonschema.Draft202012Validator.check_schema(schema)
    jsonschema.validate(demonstration(), schema)


def test_the_version_and_wrong_words(capsys: pytest.CaptureFixture[str]) -> None:
    for arguments, code in ((["--version"], 0), ([], 2), (["fly"], 2), (["report"], 2)):
        with pytest.raises(SystemExit) as ended:
            main(arguments)
        assert ended.value.code == code
    assert capsys.readouterr().out.strip() == __version__


def test_as_a_program_of_its_own(tmp_path: Path, job_file: Path) -> None:
    """Also where the console's own encoding has no Δ, as on Windows behind a pipe."""
    for encoding in ("utf-8", "cp1252", "ascii"):
        done = run("report", job_file, PYTHONIOENCODING=encoding)
        assert (done.returncode, done.stderr) == (0, b"")
        assert json.loads(done.stdout.decode("utf-8")) == answer_to(demonstration())
    refused = run("report", written(tmp_path / "bad.json", {"format": "wedgewright.job/1", "id": "Ж" * 70}))
    assert refused.returncode == 2
    assert json.loads(refused.stdout.decode("utf-8"))["errors"][1]["given"] == "Ж" * 64


def test_run_as_a_module_ends_with_its_code(
    monkeypatch: pytest.MonkeyPatch, job_file: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.delitem(sys.modules, "pycore.__main__", raising=False)
    monkeypatch.setattr(sys, "argv", ["pycore", "report", str(job_file)])
    with pytest.raises(SystemExit) as ended:
        runpy.run_module("pycore", run_name="__main__")
    assert ended.value.code == 0
    assert json.loads(capsys.readouterr().out)["job"] == "DEMO-1042"
