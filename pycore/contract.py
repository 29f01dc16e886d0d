"""The text of the door: strict JSON in, JSON out, with its limits and format names."""

import json
import re
from collections.abc import Mapping
from typing import Any, NoReturn

from pycore.errors import Fault, RefusedError

JOB_FORMAT = "wedgewright.job/1"
REQUEST_FORMAT = "wedgewright.request/1"
REPORT_FORMAT = "wedgewright.report/1"
REFUSAL_FORMAT = "wedgewright.refusal/1"
CONTRACT = 1

MAXIMUM_JOB_BYTES = 64 * 1024
MAXIMUM_REQUEST_BYTES = 1024 * 1024
MAXIMUM_DEPTH = 8
_STRING_OR_BRACKET = re.compile(r'"(?:[^"\\]|\\.)*"?|[\[\]{}]', re.DOTALL)
ENVELOPE_DEPTH = 2  # an envelope wraps a job, and an edition goes as deep as a job


class JsonNumber(str):
    """The digits of a JSON number, kept as they were written.

    >>> JsonNumber("2.250")
    '2.250'
    """


def depth_of(text: str) -> int:
    """Count how deep the brackets of a JSON text nest, without decoding it.

    Arguments: `text`. Returns a count.

    >>> depth_of('{"a": ["]]]", {}]}')
    3
    """
    depth = deepest = 0
    for token in _STRING_OR_BRACKET.findall(text):
        if token in "[{":
            depth += 1
            deepest = max(deepest, depth)
        elif token in "]}":
            depth -= 1
    return deepest


def _refuse(code: str, fix: str, field: str = "", given: str = "", **params: str) -> NoReturn:
    raise RefusedError((Fault(code=code, field=field, given=given[:64], params=params, fix=fix),))


def _unique(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    keys: dict[str, Any] = {}
    for key, value in pairs:
        if key in keys:
            _refuse("json-duplicate-key", "write-once", key, key)
        keys[key] = value
    return keys


def _constant(name: str) -> NoReturn:
    _refuse("json-not-a-number", "type-number", given=name)


def decode(text: str) -> dict[str, Any]:
    """Decode one request strictly; numbers come back as their own digits.

    Arguments: `text` JSON. Returns the outermost object.
    Raises RefusedError: request-too-long, json-too-deep, json-malformed, json-duplicate-key,
    json-not-a-number, json-surrogate, json-not-an-object.

    >>> decode('{"sphere": -2.250}')
    {'sphere': '-2.250'}
    """
    try:
        length = len(text.encode())
    except UnicodeEncodeError:
        _refuse("json-surrogate", "send-again")
    if length > MAXIMUM_REQUEST_BYTES:
        _refuse("request-too-long", "shorten", limit=str(MAXIMUM_REQUEST_BYTES // 1024))
    if depth_of(text) > MAXIMUM_DEPTH + ENVELOPE_DEPTH:
        _refuse("json-too-deep", "send-again", limit=str(MAXIMUM_DEPTH))
    try:
        value = json.loads(
            text,
            parse_float=JsonNumber,
            parse_int=JsonNumber,
            parse_constant=_constant,
            object_pairs_hook=_unique,
        )
    except json.JSONDecodeError as error:
        _refuse("json-malformed", "send-again", given=text[error.pos : error.pos + 20])
    if not isinstance(value, dict):
        _refuse("json-not-an-object", "send-again", given=text)
    if "\\u" in text:  # only an escape can bring in half a pair
        try:
            json.dumps(value, ensure_ascii=False).encode()
        except UnicodeEncodeError:
            _refuse("json-surrogate", "send-again")
    return value


def check_job_size(job: Mapping[str, Any]) -> None:
    """Refuse a job document that is longer or deeper than a job may be.

    Arguments: `job` decoded. Raises RefusedError: job-too-long, json-too-deep.

    >>> check_job_size({"id": "T-1"})
    """
    text = json.dumps(job, ensure_ascii=False)
    check_job_text(text)
    if depth_of(text) > MAXIMUM_DEPTH:
        _refuse("json-too-deep", "send-again", "job", limit=str(MAXIMUM_DEPTH))


def check_job_text(text: str) -> None:
    """Refuse a job's text that is longer than a job may be.

    Arguments: `text` JSON. Raises RefusedError: job-too-long.

    >>> check_job_text("{}")
    """
    if len(text.encode()) > MAXIMUM_JOB_BYTES:
        _refuse("job-too-long", "shorten", "job", limit=str(MAXIMUM_JOB_BYTES // 1024))


def encode(answer: Mapping[str, Any]) -> str:
    """Write an answer as one JSON text, without spaces, characters as they are.

    Arguments: `answer`. Returns JSON.

    >>> encode({"unit": "\u0394"})
    '{"unit":"\u0394"}'
    """
    return json.dumps(answer, ensure_ascii=False, separators=(",", ":"), allow_nan=False)
