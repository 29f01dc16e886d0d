"""Puts a release together out of what has been built: `python3 build.py release` writes it into the folder `release`.

The same sources give the same bytes: times are fixed, names sorted, and nothing is packed anew.
"""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
import tempfile
import zipfile
from hashlib import sha256
from pathlib import Path
from string import Template

from delivery.bill import bill_of_materials

ROOT = Path(__file__).resolve().parents[1]
FIXED_TIME = (1980, 1, 1, 0, 0, 0)


def program_version() -> str:
    """The version that the core states."""
    from pycore import __version__

    return __version__


def zip_of(folder: Path, top: str) -> bytes:
    """A folder as a zip with one folder in it.

    It is stored, not deflated: the large files are packed already, and not every zlib packs to the same bytes.
    """
    buffer = io.BytesIO()
    with zipfile.ZipFile(buffer, "w", zipfile.ZIP_STORED) as archive:
        for path in sorted(path for path in folder.rglob("*") if path.is_file()):
            entry = zipfile.ZipInfo(f"{top}/{path.relative_to(folder).as_posix()}", FIXED_TIME)
            entry.create_system = 3  # the same on every system: the mode below is a Unix one
            entry.external_attr = 0o100644 << 16
            archive.writestr(entry, path.read_bytes())
    return buffer.getvalue()


def wheel() -> tuple[str, bytes]:
    """The core's wheel: its name and content. Hatchling fixes the times in it by itself, unless it is told a time."""
    environment = {name: value for name, value in os.environ.items() if name != "SOURCE_DATE_EPOCH"}
    with tempfile.TemporaryDirectory() as folder:
        make = [sys.executable, "-S", "-m", "hatchling", "build", "--target", "wheel", "--directory", folder]
        made = subprocess.run(make, cwd=ROOT, env=environment, check=False, capture_output=True, text=True)
        if made.returncode != 0:
            raise SystemExit(made.stderr)
        (path,) = Path(folder).glob("*.whl")
        return path.name, path.read_bytes()


def licence_texts(folder: Path) -> str:
    """Our own licence and those of all that is bundled, as they lie in the built folder."""
    return "\n".join((folder / name).read_text("utf-8") for name in ("LICENSE.txt", "NOTICES.txt"))


def release_files(folder: Path, single: Path, installed: Path) -> dict[str, bytes]:
    """Every file of the release by name.

    `folder` and `single` are what was built, `installed` the packages that the build was made with.
    """
    version = program_version()
    name = f"wedgewright-{version}"
    wheel_name, wheel_content = wheel()
    delivered = {
        f"{name}.zip": zip_of(folder, "wedgewright"),
        f"{name}.html": single.read_bytes(),
        wheel_name: wheel_content,
    }
    bill = bill_of_materials(ROOT, installed, version, delivered)
    page = Template((ROOT / "delivery" / "for-it.html").read_text("utf-8"))
    files = {
        **delivered,
        f"{name}.cdx.json": (json.dumps(bill, indent=1, ensure_ascii=False) + "\n").encode(),
        "LICENCES.txt": licence_texts(folder).encode(),
        "CHANGES.md": (ROOT / "CHANGES.md").read_bytes(),
        "for-it.html": page.substitute(version=version, name=name, wheel=wheel_name).encode(),
    }
    sums = "".join(f"{sha256(files[file]).hexdigest()}  {file}\n" for file in sorted(files))
    return {**files, "SHA256SUMS": sums.encode()}


def main() -> None:
    """Write the release: the folders of the build, of its packages and of the release are the arguments."""
    folder, single, installed, out = map(Path, sys.argv[1:])
    out.mkdir(parents=True, exist_ok=True)
    for path in out.iterdir():
        path.unlink()
    for name, content in sorted(release_files(folder, single, installed).items()):
        (out / name).write_bytes(content)
        print(f"{len(content):>10}  {name}")


if __name__ == "__main__":
    main()
