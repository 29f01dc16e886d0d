"""The software bill of materials in CycloneDX 1.6: what is delivered, what it was built with, each with version, licence, hash.

Everything comes from what pins it: the page's lock file, `requirements/build.txt` with the packages installed from it, and
`notices/parts.json` for what is compiled into Pyodide.
"""

from __future__ import annotations

import hashlib
import json
import re
import uuid
from base64 import b64decode
from collections.abc import Iterator
from importlib.metadata import Distribution, distributions
from pathlib import Path
from typing import Any

Component = dict[str, Any]

# What packages say of their licence in the words of the Python package index, where they do not name it by its SPDX code.
CLASSIFIED = {
    "License :: OSI Approved :: MIT License": "MIT",
    "License :: OSI Approved :: Apache Software License": "Apache-2.0",
    "License :: OSI Approved :: Mozilla Public License 2.0 (MPL 2.0)": "MPL-2.0",
    "License :: OSI Approved :: BSD License": "BSD-3-Clause",
}
TAKEN = "The files are those of the release; what is carried is made from them by web/build of the sources and cut to what is used."
SPACE = uuid.UUID("5f0c2ad4-94a5-4b2b-9f6e-3f6a4a0f4d52")  # drawn once for this project; numbers of its bills derive from it


def sha256(content: bytes) -> Component:
    """A hash as CycloneDX writes it."""
    return {"alg": "SHA-256", "content": hashlib.sha256(content).hexdigest()}


def licences(expression: str) -> list[Component]:
    """An SPDX code or expression as CycloneDX writes it."""
    return [{"expression": expression}] if " " in expression else [{"license": {"id": expression}}]


# --- what is delivered -----------------------------------------------------------------------------------------------


def pyodide(web: Path, notices: Path) -> Component:
    """The runtime, with the files of it that are carried and the parts that are compiled into each."""
    package = web / "node_modules" / "pyodide"
    parts = json.loads((notices / "parts.json").read_text("utf-8"))
    files = []
    for name in ("pyodide.asm.js", "pyodide.asm.wasm", "pyodide.js", "python_stdlib.zip"):
        inside = [
            {"type": "library", "name": part["name"], "version": part["version"], "licenses": licences(part["licence"])}
            for part in parts
            if part["file"] == name
        ]
        file: Component = {"type": "file", "name": name, "hashes": [sha256((package / name).read_bytes())]}
        files.append(file | ({"components": inside} if inside else {}))
    return npm_component(web, "pyodide", "required") | {"pedigree": {"notes": TAKEN}, "components": files}


def npm_component(web: Path, name: str, scope: str) -> Component:
    """A package of the page's lock file."""
    entry = json.loads((web / "package-lock.json").read_text("utf-8"))["packages"][f"node_modules/{name}"]
    algorithm, digest = entry["integrity"].split("-", 1)
    purl = f"pkg:npm/{name.replace('@', '%40', 1)}@{entry['version']}"
    return {
        "type": "library",
        "bom-ref": purl,
        "name": name,
        "version": entry["version"],
        "scope": scope,
        "licenses": licences(entry["license"]),
        "hashes": [{"alg": algorithm.replace("sha", "SHA-"), "content": b64decode(digest).hex()}],
        "purl": purl,
    }


# --- what it was built with ------------------------------------------------------------------------------------------


def build_packages(web: Path) -> list[str]:
    """The packages that the build's scripts import, the runtime itself aside."""
    found: set[str] = set()
    for script in (web / "build").glob("*.mjs"):
        found |= set(re.findall(r'from "((?:@[\w-]+/)?[a-z][\w-]*)"', script.read_text("utf-8")))
    return sorted(found - {"pyodide"})


def licence_of(package: Distribution) -> str:
    """The SPDX expression of an installed package."""
    stated = package.metadata.get_all("License-Expression") or []
    classified = [CLASSIFIED[line] for line in package.metadata.get_all("Classifier") or [] if line in CLASSIFIED]
    found: list[str] = stated or classified
    if len(found) != 1:
        raise LookupError(f"The licence of {package.metadata['Name']} is not clear: look, and say it in CLASSIFIED.")
    return found[0]


def python_packages(listed: Path, installed: Path) -> Iterator[Component]:
    """The packages of a list of requirements; each has one hash for every file that the list allows."""
    found = {package.metadata["Name"].lower(): package for package in distributions(path=[str(installed)])}
    for block in re.sub(r"\\\n", " ", listed.read_text("utf-8")).strip().splitlines():
        match = re.match(r"([\w.-]+)==(\S+)", block)
        if match is None:
            continue
        name, version = match.groups()
        purl = f"pkg:pypi/{name}@{version}"
        yield {
            "type": "library",
            "bom-ref": purl,
            "name": name,
            "version": version,
            "scope": "excluded",
            "licenses": licences(licence_of(found[name.lower()])),
            "hashes": [{"alg": "SHA-256", "content": digest} for digest in re.findall(r"--hash=sha256:([0-9a-f]{64})", block)],
            "purl": purl,
        }


# --- the bill --------------------------------------------------------------------------------------------------------


def bill_of_materials(root: Path, installed: Path, version: str, delivered: dict[str, bytes]) -> Component:
    """The whole bill.

    `root` is the checkout, `installed` the folder with the packages of `requirements/build.txt`, `delivered` the files of
    the release by name. The same release has the same bill: it carries no time, and its number comes from its content.
    """
    web = root / "web"
    runtime = pyodide(web, root / "notices")
    program: Component = {
        "type": "application",
        "bom-ref": f"wedgewright@{version}",
        "name": "wedgewright",
        "version": version,
        "description": "Verification bench for compound prism",
        "licenses": licences("MIT"),
        "components": [{"type": "file", "name": name, "hashes": [sha256(delivered[name])]} for name in sorted(delivered)],
    }
    built_with = [npm_component(web, name, "excluded") for name in build_packages(web)]
    built_with += python_packages(root / "requirements" / "build.txt", installed)
    content = {
        "metadata": {"component": program},
        "components": [runtime, *built_with],
        "dependencies": [{"ref": program["bom-ref"], "dependsOn": [runtime["bom-ref"]]}, {"ref": runtime["bom-ref"]}],
    }
    number = uuid.uuid5(SPACE, json.dumps(content, sort_keys=True))
    return {"bomFormat": "CycloneDX", "specVersion": "1.6", "serialNumber": f"urn:uuid:{number}", "version": 1, **content}
