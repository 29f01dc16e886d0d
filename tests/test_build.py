"""What the build leaves: a folder that can be copied, the same each time."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
import zipfile
from io import BytesIO
from pathlib import Path

import pytest

import build
from tests.payloads import read_payload

MEGABYTE = 1_000_000


def tree(folder: Path) -> dict[str, bytes]:
    """Every file of a folder, by its name."""
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in sorted(folder.rglob("*")) if path.is_file()}


def library(folder: Path) -> zipfile.ZipFile:
    """The zip of byte code inside a built folder."""
    return zipfile.ZipFile(BytesIO(read_payload(folder / "engine" / "python.js")))


def test_folder_holds_what_a_browser_reads_from_disk(dist: Path) -> None:
    files = tree(dist)
    assert set(files) == {
        "index.html",
        "app.js",
        "app.css",
        "print.css",
        "engine/worker.js",
        "engine/wasm.js",
        "engine/snapshot.js",
        "engine/python.js",
        "styles.js",
        "sw.js",
        "install.html",
        "install.json",
        "LICENSE.txt",
        "NOTICES.txt",
    }
    assert sum(map(len, files.values())) <= 9.5 * MEGABYTE


def test_single_file_stands_alone(single_file: Path) -> None:
    html = single_file.read_text("utf-16")
    head = html[: html.index("</head>")]
    assert re.search(r"<(?:link|script)[^>]*\b(?:href|src)=", head) is None
    assert "'self'" not in re.findall(r"script-src [^;]*|style-src [^;]*", head)[0]
    assert single_file.stat().st_size <= 11 * MEGABYTE


def common_start(one: bytes, other: bytes) -> int:
    """How many bytes are the same at the beginning."""
    return next((index for index, (a, b) in enumerate(zip(one, other, strict=False)) if a != b), min(len(one), len(other)))


def test_program_is_pyodides_with_fewer_exports(dist: Path) -> None:
    """Before and after the list of exports (WebAssembly Core Specification 2.0, section 5.5.10) every byte is the same."""
    stock = (build.WEB / "node_modules" / "pyodide" / "pyodide.asm.wasm").read_bytes()
    ours = read_payload(dist / "engine" / "wasm.js")
    before = common_start(stock, ours)
    after = common_start(stock[:before:-1], ours[:before:-1])
    assert before + after > len(ours) - 0.02 * MEGABYTE
    assert len(stock) - before - after < 0.6 * MEGABYTE


def test_scripts_are_cut_and_changed_in_one_place(dist: Path) -> None:
    engine = (dist / "engine" / "worker.js").read_text("utf-8")
    assert len(engine) <= 0.55 * MEGABYTE
    assert engine.count("Module.initTrampoline=_PyEM_InitTrampoline_js") == 1


def test_nothing_of_this_machine_is_in_the_bundle(dist: Path, single_file: Path) -> None:
    needles = [os.fsencode(build.ROOT), os.fsencode(Path.home()), b"wedgewright-"]  # the last: where the snapshot is made
    with library(dist) as names:
        contents = {**tree(dist), "single": single_file.read_bytes()} | {name: names.read(name) for name in names.namelist()}
    contents["memory"] = read_payload(dist / "engine" / "snapshot.js")
    for name, content in contents.items():
        assert not [needle for needle in needles[:2] if len(needle) > 4 and needle in content], name
    assert needles[2] not in contents["memory"]


def test_core_is_there_as_byte_code_only(dist: Path) -> None:
    with library(dist) as payload:
        names = set(payload.namelist())
    sources = {path.relative_to(build.ROOT).as_posix() for path in (build.ROOT / "pycore").rglob("*.py")}
    assert {f"{name}c" for name in sources} <= names
    assert not [name for name in names if name.endswith(".py")]


ANOTHER_YEAR = """
const Real = Date;
const now = () => Real.now() + 4e10;
globalThis.Date = class extends Real { constructor(...given) { super(...(given.length ? given : [now()])); } static now = now; };
"""


@pytest.mark.slow
def test_another_build_elsewhere_is_the_same(
    dist: Path, single_file: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """In another folder, year, time zone, language and home, byte for byte, the kept memory included."""
    core = tmp_path / "elsewhere" / "pycore"
    shutil.copytree(build.ROOT / "pycore", core, ignore=shutil.ignore_patterns("__pycache__"))
    (tmp_path / "year.mjs").write_text(ANOTHER_YEAR)
    (tmp_path / "scratch").mkdir()
    for name, value in {
        "NODE_OPTIONS": f"--import={(tmp_path / 'year.mjs').as_uri()}",
        "TZ": "Pacific/Kiritimati",
        "LANG": "tr_TR.UTF-8",
        "LC_ALL": "tr_TR.UTF-8",
        "HOME": str(tmp_path),
        "USER": "somebody",
        "TMPDIR": str(tmp_path / "scratch"),
    }.items():
        monkeypatch.setenv(name, value)
    out, single = tmp_path / "out", tmp_path / "single"
    build.run_node(build.WEB / "build" / "build.mjs", "--core", core, "--out", out, "--single", single)
    assert tree(out) == tree(dist)
    assert (single / "wedgewright.html").read_bytes() == single_file.read_bytes()


@pytest.mark.slow
def test_a_step_is_done_once(dist: Path) -> None:
    again = subprocess.run(
        [sys.executable, "-W", "error", build.ROOT / "build.py", "build"], capture_output=True, text=True, check=True
    )
    assert again.stdout == ""
    assert dist.exists()


@pytest.mark.slow
@pytest.mark.parametrize("source", ["snapshot", "python"])
def test_bundle_computes_the_demonstration_as_the_core_does(dist: Path, source: str) -> None:
    """The page's Python, started either way, against this one: the same text, figure for figure."""
    shown = subprocess.run(
        [build.node(), build.WEB / "build" / "report.mjs", dist, source], capture_output=True, text=True, encoding="utf-8", check=True
    ).stdout
    from pycore.api import handle

    job = json.loads(handle('{"format": "wedgewright.request/1", "do": "demonstration"}'))["job"]
    request = {"format": "wedgewright.request/1", "do": "report", "job": job, "text": True}
    assert shown.rstrip("\n") == json.loads(handle(json.dumps(request)))["text"].rstrip("\n")
