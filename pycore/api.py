"""The door: one text in, one text out, for the page, the command line and the tests alike."""

import re
from collections.abc import Mapping
from contextvars import copy_context
from typing import Any

from pycore.actions import ACTIONS
from pycore.contract import REFUSAL_FORMAT, REQUEST_FORMAT, check_job_text, decode, encode
from pycore.errors import Fault, RefusedError
from pycore.job.fields import Fields
from pycore.names import Entry, spoken
from pycore.optics.prism import EYES
from pycore.words import LANGUAGES, say, speak

ENVELOPE_KEYS = ("format", "do", "sequence")
SEQUENCE = re.compile("[0-9]{1,15}", re.ASCII)


def handle(request: str) -> str:
    """Answer one request; never raises.

    Arguments: `request` JSON text, a job or an envelope. Returns JSON text, a report or other
    answer, or a refusal with every fault. A fault of the program itself has code `internal`.

    >>> handle('{"format": "wedgewright.job/1"}')[:40]
    '{"format":"wedgewright.refusal/1","error'
    """
    # In a context of its own, so that nothing of this request, its language least, is left to the next.
    return copy_context().run(_handle, request)


def _handle(request: str) -> str:
    sequence = ""
    try:
        source = decode(request)
        if source.get("language") in LANGUAGES:
            speak(source["language"])
        if source.get("format") == REQUEST_FORMAT:
            given = source.get("sequence")
            sequence = given if isinstance(given, str) and SEQUENCE.fullmatch(given) else ""
            answer = _answer(source)
        else:
            check_job_text(request)
            answer = ACTIONS["report"]({"job": source}, Fields({}, "", []))
    except RefusedError as refused:
        answer = refusal(refused.faults)
        if refused.echo:
            answer["echo"] = refused.echo
    except Exception as error:  # the door's promise: a slip of ours is an answer, not a crash
        fault = Fault(
            code="internal", field="", params={"kind": type(error).__name__}, fix="report-fault"
        )
        answer = refusal((fault,))
    if sequence:
        answer = {**answer, "sequence": int(sequence)}
    return encode(answer)


def _answer(envelope: Mapping[str, Any]) -> Entry:
    """Do what an envelope asks, once every key of it was read and found right."""
    faults: list[Fault] = []
    fields = Fields(envelope, "", faults)
    for key in ENVELOPE_KEYS:
        fields.raw(key)
    sequence = envelope.get("sequence")
    if sequence is not None and not (isinstance(sequence, str) and SEQUENCE.fullmatch(sequence)):
        fields.refuse("number-malformed", "sequence", sequence, "type-number")
    fields.word("language", LANGUAGES)
    wanted = fields.word("do", tuple(ACTIONS)) or "report"
    if faults:
        raise RefusedError(tuple(faults))
    return ACTIONS[wanted](envelope, fields)


def refusal(faults: tuple[Fault, ...]) -> Entry:
    """A refusal with every fault at once. Arguments: `faults`. Returns the answer."""
    return {
        "format": REFUSAL_FORMAT,
        "errors": [
            {
                "code": fault.code,
                "field": _printable(fault.field),
                "given": _printable(fault.given),
                "params": {
                    **spoken(fault.params),
                    "given": _printable(fault.given),
                    "field_name": field_name(_printable(fault.field)),
                },
                "fix": fault.fix,
            }
            for fault in faults
        ],
    }


def _printable(text: str) -> str:
    """A text without the broken characters that no file could hold."""
    return text.encode("utf-8", "replace").decode()


def field_name(path: str) -> str:
    """The name a person knows a field by. Arguments: `path` in the document. Returns words.

    >>> field_name("readings.left.sphere")
    'left lens, as read: sphere'
    """
    parts = path.replace("]", "").replace("[", ".").split(".")
    last = next((part for part in reversed(parts) if not part.isdigit()), "")
    place = ".".join(part for part in parts if part in ("readings", "stated", *EYES))
    name = say(f"fields.{last}").removeprefix("fields.")
    if not place or place == last:
        return name
    return say("text.field-name", place=say(f"places.{place}").removeprefix("places."), name=name)
