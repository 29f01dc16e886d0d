"""Run inside Pyodide where the snapshot is made: import everything, read every data file, make the first calls.

What the page starts from later is the memory as it is after this: there are no files any more, so whatever is not in
memory by then is gone. That is tried here: the calls are made once more with the library taken away.
"""

import functools
import gc
import importlib
import json
import os
import sys
import zipimport

LIBRARY = f"/lib/python{sys.version_info.major}{sys.version_info.minor}.zip"
PACKAGE = "pycore"
FORMAT = "wedgewright.request/1"


def import_everything(names: list[str]) -> None:
    """Import each module of the library's zip, which holds what is used and no more, the core's command line aside."""
    for name in names:
        if name.endswith(".pyc") and not name.endswith("/__main__.pyc"):
            importlib.import_module(name.removesuffix(".pyc").removesuffix("/__init__").replace("/", "."))


def read_data(names: list[str]) -> None:
    """Read each data file of the core, which keeps its text."""
    from pycore.data import package_text

    for name in names:
        folder, _, rest = name.partition("/")
        if folder == PACKAGE and not name.endswith((".pyc", "/")):
            package_text(rest)


def first_calls() -> list[int]:
    """Ask what a bench asks first, of every pair of the demonstration, and return the answers' hashes."""
    from pycore.api import handle

    answers: list[int] = []

    def ask(do: str, **given: object) -> dict[str, object]:
        text = handle(json.dumps({"format": FORMAT, "do": do, **given}))
        answers.append(hash(text))
        answer: dict[str, object] = json.loads(text)
        if "errors" in answer:
            raise RuntimeError(f"{do} was refused: {text}")
        return answer

    ask("list-editions")
    first = ask("demonstration")
    for pair in first["pairs"]:  # type: ignore[attr-defined]
        job = ask("demonstration", pair=pair)["job"]
        ask("report", job=job, sections=[], scenes=True)
        ask("report", job=job, scenes=True, text=True)
    ask("read-order", line="R +0.75 -2.25 x20 3 BI 1.5 BU L +0.50 add 1.75")
    ask("touch", job=first["job"], eye="right", x="1", y="1")
    ask("step", job=first["job"], eye="left", right="1", up="1")
    return answers


def forget_what_was_typed() -> None:
    """Empty the caches that are kept short, which hold what jobs hold; the others hold what never changes."""
    for value in gc.get_objects():
        if isinstance(value, functools._lru_cache_wrapper) and value.cache_parameters()["maxsize"] is not None:
            value.cache_clear()


def main() -> None:
    """Leave the memory as the page wants it."""
    names = sorted(zipimport.zipimporter(LIBRARY)._get_files())
    import_everything(names)
    read_data(names)
    with_files = first_calls()
    os.remove(LIBRARY)
    if first_calls() != with_files:
        raise RuntimeError("The core answers otherwise without its files.")
    forget_what_was_typed()


main()
# What is there now stays: it is not looked over for what could be thrown away, neither at the start nor at a keystroke.
gc.collect()
gc.freeze()
gc.set_threshold(50_000, 50, 100)
