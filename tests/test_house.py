"""The rules of the house, held by machine: floors, docstrings, what the page's scripts never do, what is never written down."""

from __future__ import annotations

import ast
import json
import os
import re
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
CORE = ROOT / "pycore"
MODULES = sorted(CORE.rglob("*.py"))

# From the ground up. A module imports from its own floor and from those below; what is not named here is the door.
FLOORS = [
    {"__init__", "angles", "contract", "data", "decimals", "errors", "words"},
    {"optics"},
    {"job"},
    {"editions"},
    {"bench"},
    {"scenes"},
    {"tray"},
]
DOOR = len(FLOORS)
# The core runs inside the page, where there is no file system worth the name, no process and no network.
NEVER_IMPORTED = {"asyncio", "ctypes", "multiprocessing", "pickle", "socket", "subprocess", "threading", "urllib", "js", "pyodide"}


def name_of(path: Path) -> str:
    """The dotted name of a module of the core."""
    parts = path.relative_to(ROOT).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


def floor_of(module: str) -> int:
    """The floor on which a module of the core stands."""
    part = module.split(".")[1] if "." in module else "__init__"
    return next((floor for floor, names in enumerate(FLOORS) if part in names), DOOR)


def imports_of(tree: ast.Module) -> Iterator[str]:
    """Every module that a module imports, wherever in it, with the names taken from a package as modules of it."""
    modules = {name_of(path) for path in MODULES}
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, "imports are written out in full"
            base = node.module or ""
            names = [f"{base}.{alias.name}" for alias in node.names]
            yield from (name if name in modules else base for name in names)


def test_there_is_a_core() -> None:
    assert len(MODULES) > 20


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_imports_go_down(path: Path) -> None:
    module, tree = name_of(path), ast.parse(path.read_text("utf-8"))
    for imported in imports_of(tree):
        top = imported.split(".")[0]
        assert top == "pycore" or (top in sys.stdlib_module_names and top not in NEVER_IMPORTED), f"{module} imports {imported}"
        if top == "pycore" and imported != "pycore":
            assert floor_of(imported) <= floor_of(module), f"{module} reaches up to {imported}"


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_what_is_public_is_described(path: Path) -> None:
    """Each module, public class and public function has a docstring; up to the optics each function has an example too."""
    tree = ast.parse(path.read_text("utf-8"))
    assert ast.get_docstring(tree)
    for node in tree.body:
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_"):
            text = ast.get_docstring(node)
            assert text, f"{node.name} has no docstring"
            if isinstance(node, ast.FunctionDef) and floor_of(name_of(path)) <= 1 and node.args.args:
                assert ">>>" in text, f"{node.name} has no example"
            for member in node.body if isinstance(node, ast.ClassDef) else []:
                if isinstance(member, ast.FunctionDef) and not member.name.startswith("_"):
                    assert ast.get_docstring(member), f"{node.name}.{member.name} has no docstring"


# --- the page's scripts ----------------------------------------------------------------------------------------------

SCRIPTS = sorted(
    path for folder in ("app", "worker", "served") for path in (ROOT / "web" / folder).rglob("*.js") if "generated" not in path.parts
)

BANNED = {
    "the network": r"\bfetch\b|XMLHttpRequest|\bWebSocket\b|EventSource|sendBeacon|WebTransport|RTCPeerConnection|serviceWorker|https?://",
    "loading ahead": r"preconnect|prefetch|preload|prerender|modulepreload",
    "leaving the page": r"window\.open|location\.(?:assign|replace|href)|\blocation\s*=",
    "text as HTML": r"innerHTML|outerHTML|insertAdjacentHTML|document\.write|DOMParser|srcdoc|createContextualFragment",
    "text as code": r"\beval\(|new Function|set(?:Timeout|Interval)\(\s*[\"'`]",
    "style attributes": r"setAttribute\(\s*[\"']style[\"']|cssText",
    "numbers out of text": r"parseFloat|parseInt|\bNumber\(|valueAsNumber",
    "numbers into text": r"toFixed|toPrecision|toLocaleString|\bIntl\.",
}
# Where one of these is meant: file → (pattern, why).
MEANT = {
    "app/boot.js": (r"RTCPeerConnection", "taken away here"),
    "app/dom.js": (r'"http://www\.w3\.org/2000/svg"', "a name of a vocabulary, nothing is loaded"),
    "app/dial.js": (r"toFixed", "the place of a touch, told to the core as text"),
    "app/job.js": (r"Number\(step\)", "a place in a list"),
    "app/prism-rows.js": (r"Number\.parseInt\(place", "a place in a list"),
    "app/served.js": (r"navigator\.serviceWorker", "keeps the page that came from a server, and is not begun elsewhere"),
    "served/sw.js": (r"fetch\(addressOf\(name\)|fetch\(request\)|fetch(?=\")", "reads the page's own files from its own server"),
    "worker/python.js": (r'"https://offline\.invalid/"|fetch', "what Pyodide sees in place of the network"),
}


def code_of(path: Path) -> str:
    """A script's text without its comments, as far as a pattern can tell."""
    text = re.sub(r"/\*.*?\*/", "", path.read_text("utf-8"), flags=re.DOTALL)
    return re.sub(r"(?m)(?:^|\s)//.*$", "", text)


@pytest.mark.parametrize("path", SCRIPTS, ids=lambda path: path.name)
def test_scripts_keep_to_what_the_page_may_do(path: Path) -> None:
    code = code_of(path)
    meant = MEANT.get(path.relative_to(ROOT / "web").as_posix())
    if meant:
        assert re.search(meant[0], code), f"no longer needed: {meant[1]}"
        code = re.sub(meant[0], "", code)
    found = {why: match.group() for why, pattern in BANNED.items() if (match := re.search(pattern, code))}
    assert found == {}


@pytest.mark.parametrize("why", BANNED)
def test_the_bans_would_be_noticed(why: str) -> None:
    """Each pattern finds what it is for."""
    samples = {
        "the network": "const answer = await fetch(url);",
        "loading ahead": 'link.rel = "preconnect";',
        "leaving the page": "location.href = url;",
        "text as HTML": "cell.innerHTML = text;",
        "text as code": "eval(text)",
        "style attributes": 'cell.setAttribute("style", "color: red");',
        "numbers out of text": "parseFloat(input.value)",
        "numbers into text": "value.toFixed(2)",
    }
    assert re.search(BANNED[why], samples[why])


def test_the_page_refers_to_its_own_files_only() -> None:
    html = (ROOT / "web" / "index.html").read_text("utf-8")
    references = re.findall(r"""(?:src|href|action|data|poster|srcset)\s*=\s*["']?([^"'\s>]+)""", html)
    assert {reference for reference in references if not reference.startswith("#")} == {"data:,", "app.css", "print.css", "app.js"}
    assert re.search(r"\sstyle\s*=|\son[a-z]+\s*=|<style|<script(?![^>]*\bsrc=)", html) is None
    for name in ("app.css", "print.css"):
        assert re.search(r"url\(|@import|@font-face", (ROOT / "web" / name).read_text("utf-8")) is None


# --- what is never written down --------------------------------------------------------------------------------------

IGNORED = {".git", ".tools", "dist", "dist-single", "release", "node_modules", "test-results", "generated", "__pycache__"}
# Written in pieces, so that this file is free of them as well.
UNWANTED = re.compile(
    "|".join(
        [
            r"pypi" r"\.org",
            r"python" r"hosted",
            r"npm" r"js\.(?:org|com)",
            r"deb" r"ian\.org",
            r"yarn" r"pkg",
            r"/wo" r"rk/",
            r"/ro" r"ot/",
            r"\bsha" r"red/",
            r"\.libr" r"ary\b",
        ]
    )
)


def sources() -> list[Path]:
    """Every text file of this checkout that is kept."""
    found = []
    for folder, names, files in os.walk(ROOT):
        names[:] = sorted(name for name in names if name not in IGNORED and not name.endswith("_cache") and name != ".hypothesis")
        found += [Path(folder) / name for name in sorted(files) if not name.startswith(".coverage")]
    return [path for path in found if path.suffix not in {".png", ".pdf"}]


def test_no_registry_and_no_machine_is_named() -> None:
    named = {}
    for path in sources():
        match = UNWANTED.search(path.read_text("utf-8"))
        if match:
            named[path.relative_to(ROOT).as_posix()] = match.group()
    assert named == {}


def test_packages_are_pinned() -> None:
    for path in sorted((ROOT / "requirements").glob("*.txt")):
        blocks = re.sub(r"\\\n", " ", path.read_text("utf-8")).strip().splitlines()
        assert all("==" in block and "--hash=sha256:" in block for block in blocks if not block.startswith("#")), path.name
    package = json.loads((ROOT / "web" / "package.json").read_text("utf-8"))
    versions = [*package["dependencies"].values(), *package["devDependencies"].values()]
    assert all(re.fullmatch(r"(?:npm:pyodide@)?\d+\.\d+\.\d+", version) for version in versions)
    lock = json.loads((ROOT / "web" / "package-lock.json").read_text("utf-8"))
    assert all("integrity" in entry and "resolved" not in entry for name, entry in lock["packages"].items() if name)
