"""What every section answers with: numbers for callers, texts and pictures for people."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from pycore.names import Entry
from pycore.optics.prism import Eye
from pycore.scenes.dial import Scene


@dataclass(frozen=True, slots=True, kw_only=True)
class Row:
    """One line of a section's table: a code of the words, with a text for each lens, or one for
    the pair. `assumed` marks a value that rests on a usual figure nobody gave."""

    code: str
    right: str = ""
    left: str = ""
    pair: str = ""
    assumed: bool = False

    def entry(self, section: str) -> Entry:
        """The row as the report writes it; its words stand under `section_rows`."""
        return {
            "code": f"{section}.{self.code}",
            "right": self.right,
            "left": self.left,
            "pair": self.pair,
            "assumed": self.assumed,
        }


@dataclass(frozen=True, slots=True, kw_only=True)
class Ask:
    """Something missing: the field of the job that would supply it, and the usual value."""

    field: str
    usual: str = ""
    used: bool = False

    def entry(self) -> Entry:
        """The ask as the report writes it; `used` where the usual value was taken, visibly."""
        return {"field": self.field, "usual": self.usual, "used": self.used}


@dataclass(frozen=True, slots=True, kw_only=True)
class SectionAnswer:
    """A section's answer.

    `own` goes under the section's key of the report, `more` beside it under keys of its own,
    `eyes` under the eyes' key of that name;
    `title` is a code of words `section_titles` and says the answer in one line; `notes` are
    codes of words `section_notes` with their texts; `draw` makes the pictures.
    """

    title: str
    title_params: Mapping[str, str] = field(default_factory=dict)
    own: Entry | list[Entry] | None = None
    more: Entry = field(default_factory=dict)
    eyes: Mapping[Eye, Entry] = field(default_factory=dict)
    rows: tuple[Row, ...] = ()
    asks: tuple[Ask, ...] = ()
    notes: tuple[tuple[str, Mapping[str, str]], ...] = ()
    draw: Callable[[], Mapping[str, Scene]] = dict

    @property
    def scenes(self) -> Mapping[str, Scene]:
        """The pictures by name, drawn when they are asked for."""
        return self.draw()
