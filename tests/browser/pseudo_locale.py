"""A made-up language out of the English words, to see what a real one would break: accented, 40 % longer, in brackets."""

from __future__ import annotations

import json
import math
import re
import shutil
from pathlib import Path
from typing import Any

import build

OPEN, CLOSE = "⟦", "⟧"
LONGER = 0.4
LONGEST = 8
ACCENTS = str.maketrans("aceinosuyACEINOSUY", "áçéíñóšúýÁÇÉÍÑÓŠÚÝ")
HOLE = re.compile(r"(\{\w+\})")
# Written alike in every language: units, and letters that are names.
NO_WORD = re.compile(r"^(?:mm|cm³|D|g|R|L|A|B|ED|DBL|PD|BI|BU|[^A-Za-z]|\{\w+\})*$")
PLACE = "de"  # the language whose place it takes


def pseudo(text: str) -> str:
    """One sentence: its holes are kept, and what holds no word is left as it is."""
    if NO_WORD.match(text):
        return text
    dots = "·" * math.ceil(LONGER * len(HOLE.sub("", text)))
    more = " ".join(dots[place : place + LONGEST] for place in range(0, len(dots), LONGEST))  # a line may break there
    pieces = [piece if HOLE.fullmatch(piece) else piece.translate(ACCENTS) for piece in HOLE.split(text)]
    return f"{OPEN}{''.join(pieces)}{more}{CLOSE}"


def pseudo_words(node: Any) -> Any:
    """A words file in this language."""
    return pseudo(node) if isinstance(node, str) else {name: pseudo_words(inner) for name, inner in node.items()}


def build_with_pseudo_words(folder: Path) -> Path:
    """A built page in which this language stands in the place of the second one; returns its folder."""
    shutil.copytree(build.ROOT / "pycore", folder / "pycore", ignore=shutil.ignore_patterns("__pycache__"))
    shutil.copytree(build.WEB, folder / "web", ignore=shutil.ignore_patterns("node_modules", "generated"))
    (folder / "web" / "node_modules").symlink_to(build.WEB / "node_modules")
    core, page = folder / "pycore" / "words", folder / "web"
    for english, other in (
        (core / "en.json", core / f"{PLACE}.json"),
        (page / "words-page.en.json", page / f"words-page.{PLACE}.json"),
    ):
        words = pseudo_words(json.loads(english.read_text("utf-8")))
        if "page" in words:
            words["page"]["language"] = {"decimal": "comma"}  # not a word, and another than English has
        other.write_text(json.dumps(words, ensure_ascii=False), "utf-8")
    out, single = folder / "dist", folder / "single"
    where = ["--core", folder / "pycore", "--web", page, "--out", out, "--single", single]
    build.run_node(page / "build" / "build.mjs", *where)
    return out
