"""Run inside Pyodide by python.mjs: writes /python.zip from /core/pycore and /library.zip.

The zip holds, as byte code without sources, the core and those modules of the standard library that are loaded once
the runtime is up and every module of the core is imported, plus what is imported only when it is needed.
"""

import ast
import importlib
import importlib.util
import io
import sys
import zipfile
from pathlib import Path, PurePosixPath
from types import CodeType

CORE = Path("/core")
# Imported by the library itself at the moment of use, so not seen in sys.modules after a start.
LATE = ["_strptime", "encodings.ascii", "encodings.idna", "encodings.latin_1", "linecache", "tokenize", "traceback"]
FIXED_TIME = (1980, 1, 1, 0, 0, 0)


def imported_names(source: str) -> list[str]:
    """Every module named by an import statement anywhere in a source text, inside functions too."""
    names: list[str] = []
    for node in ast.walk(ast.parse(source)):
        if isinstance(node, ast.Import):
            names += [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom) and node.level == 0 and node.module:
            names.append(node.module)
    return names


def load_everything() -> None:
    """Import each module of the core (its command line aside) and whatever it may import later."""
    sys.path.insert(0, str(CORE))
    for path in sorted((CORE / "pycore").rglob("*.py")):
        if path.name == "__main__.py":
            continue
        parts = path.relative_to(CORE).with_suffix("").parts
        importlib.import_module(".".join(parts[:-1] if parts[-1] == "__init__" else parts))
        for name in imported_names(path.read_text("utf-8")):
            importlib.import_module(name)
    for name in LATE:
        importlib.import_module(name)


def without_docstrings(tree: ast.Module) -> ast.Module:
    """The same module without its docstrings (a fifth of the core's size); assertions stay."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Module | ast.ClassDef | ast.FunctionDef | ast.AsyncFunctionDef):
            first = node.body[0] if node.body else None
            if isinstance(first, ast.Expr) and isinstance(first.value, ast.Constant) and isinstance(first.value.value, str):
                del node.body[0]
                if not node.body and not isinstance(node, ast.Module):
                    node.body.append(ast.copy_location(ast.Pass(), first))
    return tree


def without_lines(code: CodeType) -> CodeType:
    """The same code with a table that says of no instruction on which line it was: there are no sources to look into.

    An entry of the table is one byte for up to eight units of code (CPython 3.13, InternalDocs/code_objects.md: 15 is "no
    location"); with the lines in it the table is a third of what is packed.
    """
    inner = tuple(without_lines(value) if isinstance(value, CodeType) else value for value in code.co_consts)
    full, rest = divmod(len(code.co_code) // 2, 8)
    table = b"\xff" * full + (bytes([0xF8 | (rest - 1)]) if rest else b"")
    return code.replace(co_consts=inner, co_linetable=table)


def byte_code(source: bytes, name: str) -> bytes:
    """The unchecked .pyc of a source: never compared with a source file, since there is none."""
    tree = without_docstrings(ast.parse(source, name))
    code = without_lines(compile(tree, name, "exec", dont_inherit=True, optimize=0))
    digest = importlib.util.source_hash(source)
    return bytes(importlib._bootstrap_external._code_to_hash_pyc(code, digest, False))  # type: ignore[attr-defined]


def main() -> None:
    """Write the zip."""
    load_everything()
    loaded = set(sys.modules)
    files: dict[str, bytes] = {}
    with zipfile.ZipFile("/library.zip") as library:
        for name in library.namelist():
            path = PurePosixPath(name)
            if path.suffix != ".py":
                continue
            parts = path.with_suffix("").parts
            module_name = ".".join(parts[:-1] if parts[-1] == "__init__" else parts)
            if module_name in loaded:
                files[str(path.with_suffix(".pyc"))] = byte_code(library.read(name), name)
    for path in (CORE / "pycore").rglob("*"):
        name = str(path.relative_to(CORE))
        if path.suffix == ".py":
            files[name + "c"] = byte_code(path.read_bytes(), name)
        elif path.is_file():
            files[name] = path.read_bytes()
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_STORED) as out:
        for name in sorted(files):
            out.writestr(zipfile.ZipInfo(name, FIXED_TIME), files[name])
    Path("/python.zip").write_bytes(buffer.getvalue())


main()
