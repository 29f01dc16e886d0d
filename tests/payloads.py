"""The payloads of a built page, read and written apart from the page's own code."""

from __future__ import annotations

import gzip
from pathlib import Path

# As web/build/payload.mjs has it: what cannot stand in a script's text comes after ESCAPE, made another by MASK.
ESCAPE, MASK = 0xE000, 0x4A00
MARK = 8  # characters that say with which program a payload was built
FORBIDDEN = {0, 0x0A, 0x0D, 0x22, 0x3C, 0x5C, 0x2028, 0x2029, 0xFEFF, 0xFFFE, 0xFFFF, ESCAPE, *range(0xD800, 0xE000)}


def read_payload(file: Path) -> bytes:
    """The bytes that a payload's script holds."""
    text = file.read_text("utf-16").split('"')[1]
    pairs = bytearray()
    units = iter(map(ord, text[1 + MARK :]))
    for unit in units:
        pairs += (next(units) ^ MASK if unit == ESCAPE else unit).to_bytes(2, "little")
    return gzip.decompress(pairs[: len(pairs) - int(text[0])])


def write_payload(file: Path, contents: bytes, mark: str = "") -> None:
    """Put other bytes into a payload's script, under the same mark or another."""
    packed = gzip.compress(contents, mtime=0)
    odd = len(packed) % 2
    units = [int.from_bytes(packed[at : at + 2], "little") for at in range(0, len(packed), 2)]
    text = "".join(chr(ESCAPE) + chr(unit ^ MASK) if unit in FORBIDDEN else chr(unit) for unit in units)
    before, old, after = file.read_text("utf-16").split('"')
    file.write_bytes(f'\ufeff{before}"{odd}{mark or old[1 : 1 + MARK]}{text}"{after}'.encode("utf-16-le"))
