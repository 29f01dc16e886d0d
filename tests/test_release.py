"""The release: what is in it, that it is the same each time, its bill of materials, and that its wheel installs where it should."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
import zipfile
from collections.abc import Iterator
from email.parser import Parser
from functools import cache
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest
from jsonschema import Draft7Validator
from referencing import Registry, Resource

import build
from pycore import __version__
from pycore.api import handle

Component = dict[str, Any]

NAME = f"wedgewright-{__version__}"
WHEEL = f"{NAME}-py3-none-any.whl"
PYODIDES = {"0.29.5": "pyodide", "314.0.8": "pyodide-314"}
# Beside the one that runs the tests, whichever of these are on the machine.
PYTHONS = ["python3.11", "python3.12", "python3.13", "python3.14", "python3.15"]


@pytest.fixture(scope="session")
def release() -> Path:
    """The release, as `build.py release` leaves it."""
    subprocess.run([sys.executable, build.ROOT / "build.py", "release"], check=True, capture_output=True)
    return build.RELEASE


@pytest.fixture(scope="session")
def bill(release: Path) -> Component:
    """The bill of materials."""
    return json.loads((release / f"{NAME}.cdx.json").read_text("utf-8"))  # type: ignore[no-any-return]


def tree(folder: Path) -> dict[str, bytes]:
    """Every file of a folder, by its name."""
    return {path.relative_to(folder).as_posix(): path.read_bytes() for path in folder.rglob("*") if path.is_file()}


def all_components(place: Component) -> Iterator[Component]:
    """Every component of a bill, however deep it stands."""
    for component in place.get("components", []):
        yield component
        yield from all_components(component)


# --- what is in it ---------------------------------------------------------------------------------------------------


def test_sums_are_those_of_all_files(release: Path) -> None:
    """By `sha256sum` of the GNU core utilities."""
    checked = subprocess.run(["sha256sum", "--check", "--strict", "SHA256SUMS"], cwd=release, capture_output=True, text=True, check=True)
    names = {line.removesuffix(": OK") for line in checked.stdout.splitlines()}
    assert names == {
        f"{NAME}.zip",
        f"{NAME}.html",
        f"{NAME}.cdx.json",
        WHEEL,
        "LICENCES.txt",
        "CHANGES.md",
        "for-it.html",
    }
    assert names | {"SHA256SUMS"} == set(tree(release))


def test_the_zip_is_the_built_folder(release: Path, dist: Path, single_file: Path, tmp_path: Path) -> None:
    with zipfile.ZipFile(release / f"{NAME}.zip") as archive:
        entries = archive.infolist()
        archive.extractall(tmp_path)
    assert tree(tmp_path / "wedgewright") == tree(dist)
    assert [entry.filename for entry in entries] == sorted(entry.filename for entry in entries)
    assert {(entry.date_time, entry.extra, entry.comment) for entry in entries} == {((1980, 1, 1, 0, 0, 0), b"", b"")}
    assert (release / f"{NAME}.html").read_bytes() == single_file.read_bytes()


@pytest.mark.slow
def test_a_release_made_elsewhere_is_the_same(release: Path, dist: Path, single_file: Path, tmp_path: Path) -> None:
    """Another folder, time zone, language and way of hashing; the built page's own sameness is tested in test_build.py."""
    strange = {"TZ": "Pacific/Chatham", "LC_ALL": "C", "PYTHONHASHSEED": "7", "SOURCE_DATE_EPOCH": "1000000000"}
    environment = {**os.environ, **build.python_with("build"), **strange}
    copied = tmp_path / "copied"
    shutil.copytree(dist, copied)
    command = [sys.executable, "-S", "-m", "delivery.release", copied, single_file, build.TOOLS / "build", tmp_path / "out"]
    subprocess.run(command, env=environment, cwd=tmp_path, check=True, capture_output=True)
    assert tree(tmp_path / "out") == tree(release)


class Page(HTMLParser):
    """What a page refers to and what it holds."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: set[str] = set()
        self.references: list[str] = []
        self.feed(text)

    def handle_starttag(self, tag: str, attributes: list[tuple[str, str | None]]) -> None:
        """Note the tag, and whatever it points to."""
        self.tags.add(tag)
        self.references += [value or "" for name, value in attributes if name in ("href", "src", "action") or name.startswith("on")]


def test_the_page_for_it_stands_alone_and_names_what_is_there(release: Path) -> None:
    text = (release / "for-it.html").read_text("utf-8")
    page = Page(text)
    assert page.references == []
    assert "script" not in page.tags
    assert "$" not in text
    for name in tree(release).keys() - {"for-it.html"}:
        assert f"<code>{name}</code>" in text, name
    store = (build.WEB / "app" / "store.js").read_text("utf-8") + (build.WEB / "app" / "settings.js").read_text("utf-8")
    for stored in ("wedgewright", "wedgewright.settings"):
        assert f'"{stored}"' in store
        assert f"<code>{stored}</code>" in text


def test_notes_and_version_agree(release: Path) -> None:
    headings = re.findall(r"(?m)^## (.*)$", (release / "CHANGES.md").read_text("utf-8"))
    assert headings[0] == __version__
    assert f'version = "{__version__}"' in (build.ROOT / "pyproject.toml").read_text("utf-8")


# --- the bill of materials -------------------------------------------------------------------------------------------


def test_bill_is_valid_by_the_published_schema(bill: Component) -> None:
    """CycloneDX 1.6, by the schema files of the project that publishes it."""
    folder = build.TOOLS / "test" / "cyclonedx" / "schema" / "_res"
    schemas = {
        name: json.loads((folder / f"{name}.SNAPSHOT.schema.json").read_text("utf-8")) for name in ("bom-1.6", "spdx", "jsf-0.82")
    }
    resources = [Resource.from_contents(schema) for schema in schemas.values()]
    # They refer to each other by the names of their files.
    named = [(f"http://cyclonedx.org/schema/{name}.SNAPSHOT.schema.json", each) for name, each in zip(schemas, resources, strict=True)]
    registry = resources @ Registry().with_resources(named)
    validator = Draft7Validator(schemas["bom-1.6"], registry=registry)
    assert [error.message for error in validator.iter_errors(bill)] == []
    spoiled = json.loads(json.dumps(bill))
    spoiled["components"][0]["licenses"] = [{"license": {"id": "no such licence"}}]
    assert list(validator.iter_errors(spoiled))


def test_every_part_has_a_version_a_licence_and_a_hash(bill: Component) -> None:
    """The hash of what is compiled into a file is that file's, inside which it stands."""
    for component in all_components(bill):
        if component["type"] == "file":
            assert component["hashes"]
        else:
            assert component["version"]
            assert component["licenses"]
    assert all(component["hashes"] for component in bill["components"])


def test_bill_names_what_is_delivered(bill: Component, release: Path) -> None:
    sums = dict(reversed(line.split("  ")) for line in (release / "SHA256SUMS").read_text("ascii").splitlines())
    delivered = bill["metadata"]["component"]["components"]
    assert {file["name"]: file["hashes"][0]["content"] for file in delivered} == {
        name: sums[name] for name in (f"{NAME}.zip", f"{NAME}.html", WHEEL)
    }
    required = [component["purl"] for component in bill["components"] if component["scope"] == "required"]
    assert required == ["pkg:npm/pyodide@0.29.5"]


def test_bill_names_what_it_was_built_with(bill: Component) -> None:
    excluded = {component["name"] for component in bill["components"] if component["scope"] == "excluded"}
    listed = re.findall(r"(?m)^([\w.-]+)==", (build.ROOT / "requirements" / "build.txt").read_text("utf-8"))
    assert excluded >= {"esbuild", *listed}


def test_each_part_stands_in_the_notices(bill: Component) -> None:
    notices = (build.ROOT / "notices" / "bundled.txt").read_text("utf-8").casefold()
    parts = [component for component in all_components(bill["components"][0]) if component["type"] == "library"]
    assert len(parts) > 15
    for part in parts:
        assert part["name"].removeprefix("Python ").casefold() in notices, part["name"]


# --- stock installs --------------------------------------------------------------------------------------------------


@cache
def in_pyodide(version: str) -> Component:
    """What a stock Pyodide says after micropip, of the version that its own lock file names, has installed the wheel."""
    folder = build.WEB / "node_modules" / PYODIDES[version]
    (micropip,) = build.WHEELS.glob("micropip-*.whl")
    lock = json.loads((folder / "pyodide-lock.json").read_text("utf-8"))
    assert micropip.name.split("-")[1] == lock["packages"]["micropip"]["version"]
    script = build.ROOT / "tests" / "web" / "install_wheel.mjs"
    command = [build.node(), script, folder, micropip, build.RELEASE / WHEEL]
    done = subprocess.run(command, capture_output=True, text=True, encoding="utf-8", check=True)
    return json.loads(done.stdout)  # type: ignore[no-any-return]


@pytest.mark.slow
@pytest.mark.parametrize("version", PYODIDES)
def test_a_stock_pyodide_installs_the_wheel(release: Path, version: str) -> None:
    assert (release / WHEEL).exists()
    package = json.loads((build.WEB / "node_modules" / PYODIDES[version] / "package.json").read_text("utf-8"))
    assert package["version"] == version
    said = in_pyodide(version)
    assert said["answer"] == json.loads(handle('{"format": "wedgewright.request/1", "do": "demonstration"}'))
    assert "wedgewright" in said["installed"]


@pytest.mark.slow
def test_bill_states_the_versions_that_the_runtime_states(release: Path, bill: Component) -> None:
    assert (release / WHEEL).exists()
    stated = {part["name"]: part["version"] for part in all_components(bill["components"][0]) if part["type"] == "library"}
    found = in_pyodide("0.29.5")["versions"]
    assert {name: stated[name] for name in found} == found
    lock = json.loads((build.WEB / "node_modules" / "pyodide" / "pyodide-lock.json").read_text("utf-8"))
    assert lock["info"]["platform"] == f"emscripten_{stated['Emscripten'].replace('.', '_')}"


def program(name: str) -> str | None:
    """A Python of this name that starts, or None: a name may be there for a version that is not."""
    found = shutil.which(name)
    if found and subprocess.run([found, "-c", ""], capture_output=True, check=False).returncode == 0:
        return found
    return None


@pytest.mark.slow
@pytest.mark.parametrize("name", [sys.executable, *PYTHONS])
def test_python_installs_the_wheel(release: Path, tmp_path: Path, name: str) -> None:
    """Its own pip, with no package but the wheel; then the command line works from what was installed, outside the checkout."""
    python = program(name)
    if python is None:
        pytest.skip(f"no {name} on this machine")
    with zipfile.ZipFile(release / WHEEL) as wheel:
        metadata = Parser().parsestr(wheel.read(f"{NAME}.dist-info/METADATA").decode("utf-8"))
    assert metadata.get_all("Requires-Dist") is None
    assert metadata["Requires-Python"] == ">=3.11"

    target = tmp_path / "installed"
    clean = {key: value for key, value in os.environ.items() if not key.startswith("PYTHON")}
    pip = [python, "-m", "pip", "install", "--quiet", "--disable-pip-version-check", "--no-index", "--target", target]
    subprocess.run([*pip, release / WHEEL], env=clean, cwd=tmp_path, check=True, capture_output=True)
    job = json.loads(handle('{"format": "wedgewright.request/1", "do": "demonstration"}'))["job"]
    (tmp_path / "job.json").write_text(json.dumps(job), "utf-8")
    command = [python, "-W", "error", "-m", "pycore", "report", "job.json"]
    done = subprocess.run(
        command, env={**clean, "PYTHONPATH": str(target)}, cwd=tmp_path, capture_output=True, text=True, encoding="utf-8", check=True
    )
    assert json.loads(done.stdout) == json.loads(handle(json.dumps(job)))
