"""Reads the package's own data files, from a folder or a zip alike."""

from functools import cache

import pycore


@cache  # a page that starts from a kept memory has no files any more
def package_text(path: str) -> str:
    """The text of a data file of this package.

    Arguments: `path` inside the package, with forward slashes. Returns its text.
    Raises OSError where there is none.

    >>> package_text("editions/iso-21987.json")[:1]
    '{'
    """
    folder = (pycore.__file__ or "").replace("\\", "/").rpartition("/")[0]
    # The loader, not open(): in the page the package lies in a zip.
    data: bytes = pycore.__loader__.get_data(f"{folder}/{path}")  # type: ignore[union-attr]
    return data.decode()
