"""Wedgewright's core: from a written spectacle order with prism to the bench's verdict.

Standard library only; no I/O beyond the package's own data, no HTML, no sentences.
Text goes in and comes out at one door, `pycore.api.handle`.
"""

__version__ = "0.1.0"
