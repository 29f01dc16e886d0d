"""Error and note values: codes and data, never sentences (those live in `pycore/words`)."""

import dataclasses
from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class Fault:
    """One reason why something typed was refused: what, where, what was given, how to mend it.

    Arguments: `code` what is wrong; `field` its path in the document; `given` the text as it
    came; `params` texts for the sentence's holes; `fix` the code of the advice.

    >>> Fault(code="number-malformed", field="right.sphere", given="2..5", fix="type-number").code
    'number-malformed'
    """

    code: str
    field: str
    given: str = ""
    params: Mapping[str, str] = dataclasses.field(default_factory=dict)
    fix: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Note:
    """Something a person should know that refuses nothing.

    Arguments: `code`; `field` the path it is about, or ""; `params` texts for the sentence;
    `severity` note, warning or ask; `about` order, reading, verdict, instrument or layout.

    >>> Note(code="axis-zero", field="right.axis").severity
    'note'
    """

    code: str
    field: str = ""
    params: Mapping[str, str] = dataclasses.field(default_factory=dict)
    severity: str = "note"
    about: str = "order"


class RefusedError(Exception):
    """Carries every fault found in one request to the door. Internal to the package.

    Arguments: `faults`; `echo` what was understood all the same, by path.

    >>> RefusedError((Fault(code="a", field="b"),)).faults[0].field
    'b'
    """

    def __init__(self, faults: tuple[Fault, ...], echo: Mapping[str, str] | None = None) -> None:
        super().__init__(", ".join(f"{fault.field}: {fault.code}" for fault in faults))
        self.faults = faults
        self.echo = dict(echo or {})
