"""What the build leaves: a folder that can be copied, the same each time."""

from __future__ import annotations

import gzip
import json
import os
import re
import shutil
import subprocess
import sys
import zipfile
from base64 import b64decode
from io import BytesIO
from pathlib import Path

import pytest

import build

MEGABYTE = 1_000_000
# The only change to Pyodide's scripts, as web/build/worker.mjs makes and explains it.
TRAMPOLINE = (
    "function _PyEM_InitTrampoline_js(){",
    "Module.initTrampoline=_PyEM_InitTrampoline_js;function _PyEM_InitTrampoline_js(){if(Module.API.config._makeSnapshot)return;",
)


def tree(folder: Path) -> dict[str, bytes]:
    """Every file of a folder, by its name."""
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in sorted(folder.rglob("*")) if path.is_file()}


def python_payload(folder: Path) -> zipfile.ZipFile:
    """The zip of byte code inside a built folder."""
    text = (folder / "engine" / "python.js").read_text("ascii")
    return zipfile.ZipFile(BytesIO(gzip.decompress(b64decode(text.split('"')[1]))))


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
    html = single_file.read_text("utf-8")
    head = html[: html.index("</head>")]
    assert re.search(r"<(?:link|script)[^>]*\b(?:href|src)=", head) is None
    assert "'self'" not in re.findall(r"script-src [^;]*|style-src [^;]*", head)[0]
    assert single_file.stat().st_size <= 9.5 * MEGABYTE


def test_bundle_is_pyodide_with_one_change(dist: Path) -> None:
    package = build.WEB / "node_modules" / "pyodide"
    engine = (dist / "engine" / "worker.js").read_text("utf-8")
    runtime = (package / "pyodide.asm.js").read_text("utf-8")
    changed = runtime.replace(*TRAMPOLINE)
    assert changed != runtime
    assert changed in engine
    assert (package / "pyodide.js").read_text("utf-8") in engine
    wasm = (dist / "engine" / "wasm.js").read_text("ascii")
    assert gzip.decompress(b64decode(wasm.split('"')[1])) == (package / "pyodide.asm.wasm").read_bytes()


def test_nothing_of_this_machine_is_in_the_bundle(dist: Path, single_file: Path) -> None:
    needles = [os.fsencode(build.ROOT), os.fsencode(Path.home())]
    with python_payload(dist) as payload:
        contents = {**tree(dist), "single": single_file.read_bytes()} | {name: payload.read(name) for name in payload.namelist()}
    for name, content in contents.items():
        assert not [needle for needle in needles if len(needle) > 4 and needle in content], name


def test_core_is_there_as_byte_code_only(dist: Path) -> None:
    with python_payload(dist) as payload:
        names = set(payload.namelist())
    sources = {path.relative_to(build.ROOT).as_posix() for path in (build.ROOT / "pycore").rglob("*.py")}
    assert {f"{name}c" for name in sources} <= names
    assert not [name for name in names if name.endswith(".py")]


@pytest.mark.slow
def test_another_build_elsewhere_is_the_same(dist: Path, single_file: Path, tmp_path: Path) -> None:
    core = tmp_path / "elsewhere" / "pycore"
    shutil.copytree(build.ROOT / "pycore", core, ignore=shutil.ignore_patterns("__pycache__"))
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
