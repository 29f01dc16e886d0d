"""Install the other browsers of Debian beside Chromium: `python3 tests/engines/install.py`.

Firefox and WebKitGTK (in place of Safari) with its driver, and a screen for it that nobody sees. As root, or where sudo
asks for no password; elsewhere what is not there is left out, and the run says so. Their versions are Debian's, not pinned.
"""

from __future__ import annotations

import os
import shutil
import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "browser"))
import chromium

PACKAGES = {"firefox-esr": "firefox-esr", "WebKitWebDriver": "webkit2gtk-driver", "xvfb-run": "xvfb", "xauth": "xauth"}


def main() -> None:
    """Install what is missing, where this user may."""
    missing = [package for program, package in PACKAGES.items() if shutil.which(program) is None]
    if not missing:
        return
    print(f"… install {', '.join(missing)}", flush=True)
    prefix = [] if hasattr(os, "geteuid") and os.geteuid() == 0 else ["sudo", "-n"]
    apt = [*prefix, "apt-get", "-q", "-y"]
    if not (chromium.succeeds(*apt, "update") and chromium.succeeds(*apt, "install", "--no-install-recommends", *missing)):
        print("They could not be installed here; what is not there is not run.", file=sys.stderr)


if __name__ == "__main__":
    main()
