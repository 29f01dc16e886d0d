"""Find Debian's Chromium, or install it: `python3 tests/browser/chromium.py` prints its version.

As root, or where sudo asks for no password, it is installed as any package. Otherwise the package and what it needs are
fetched into the checkout and unpacked there. Its version is Debian's, which changes with every security update: the one
thing here that is not pinned.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

HERE = Path(__file__).resolve().parents[2] / ".tools" / "chromium"
UNPACKED = HERE / "root"
LAUNCHER = HERE / "chromium"
# How tests start it: the first for root in a container; the others keep its own services from asking the network.
FLAGS = [
    "--no-sandbox",
    "--disable-quic",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--no-first-run",
]


def find() -> Path | None:
    """The browser's program, or None: the unpacked one if there is one, else the system's."""
    if LAUNCHER.exists():
        return LAUNCHER
    found = shutil.which("chromium", path=os.pathsep.join([os.environ.get("PATH", ""), "/usr/bin"]))
    return Path(found) if found else None


def succeeds(*command: str) -> bool:
    """Whether a command can be run and ends well; its output is shown only if it does not."""
    try:
        environment = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
        finished = subprocess.run(command, capture_output=True, text=True, env=environment, check=False)
    except OSError:
        return False
    if finished.returncode != 0:
        print(finished.stdout[-2000:] + finished.stderr[-2000:], file=sys.stderr)
    return finished.returncode == 0


def install_as_root(*prefix: str) -> bool:
    """Install the package as any other, by way of `sudo -n` if that is the prefix."""
    apt = [*prefix, "apt-get", "-q", "-y"]
    return succeeds(*apt, "update") and succeeds(*apt, "install", "--no-install-recommends", "chromium", "fonts-dejavu-core")


def unpack_here() -> bool:
    """Fetch the package and every library missing on this machine, and unpack them in the checkout."""
    archives = HERE / "cache" / "archives" / "partial"
    lists = HERE / "state" / "lists" / "partial"
    archives.mkdir(parents=True, exist_ok=True)
    lists.mkdir(parents=True, exist_ok=True)
    own = [f"-oDir::State={HERE / 'state'}", f"-oDir::Cache={HERE / 'cache'}", "-oDir::State::status=/var/lib/dpkg/status"]
    apt = ["apt-get", "-q", "-y", "-oDebug::NoLocking=1", *own]
    wanted = ["chromium", "fonts-dejavu-core"]
    if not (succeeds(*apt, "update") and succeeds(*apt, "install", "--download-only", "--no-install-recommends", *wanted)):
        return False
    for package in sorted(archives.parent.glob("*.deb")):
        if not succeeds("dpkg-deb", "--extract", str(package), str(UNPACKED)):
            return False
    shutil.rmtree(HERE / "cache")
    libraries = sorted({str(file.parent) for file in UNPACKED.rglob("*.so*")})
    program = UNPACKED / "usr" / "lib" / "chromium" / "chromium"
    # A machine without a browser may be without letters as well: these came along, and are said where to be found.
    fonts = HERE / "fonts.conf"
    fonts.write_text(f"<fontconfig><dir>{UNPACKED / 'usr' / 'share' / 'fonts'}</dir><dir>/usr/share/fonts</dir></fontconfig>\n")
    settings = f'FONTCONFIG_FILE="{fonts}" LD_LIBRARY_PATH="{":".join(libraries)}"'
    LAUNCHER.write_text(f'#!/bin/sh\n{settings} exec "{program}" "$@"\n')
    LAUNCHER.chmod(0o755)
    return True


def install() -> None:
    """Install the browser in the first way that works here."""
    print("… install the browser", flush=True)
    if hasattr(os, "geteuid") and os.geteuid() == 0:
        install_as_root()
    elif not (succeeds("sudo", "-n", "true") and install_as_root("sudo", "-n")):
        unpack_here()


def main() -> None:
    """Install the browser if need be, and say which it is."""
    if find() is None:
        install()
    program = find()
    if program is None:
        print("There is no browser here and none could be installed: the browser's tests will fail.", file=sys.stderr)
        return
    version = subprocess.run([program, "--version"], capture_output=True, text=True, check=True).stdout.strip()
    print(f"Browser: {version} ({program})", flush=True)


if __name__ == "__main__":
    main()
