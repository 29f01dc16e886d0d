"""What every action of the door does with its envelope: refuse it, or take the job out of it."""

from collections.abc import Callable, Mapping
from typing import Any, NoReturn

from pycore.contract import JOB_FORMAT, check_job_size
from pycore.errors import Fault, RefusedError
from pycore.job.fields import Fields
from pycore.names import Entry
from pycore.optics.prism import EYES, Eye

Source = Mapping[str, Any]
Action = Callable[[Source, Fields], Entry]


def refuse(code: str, field: str, given: str, fix: str, **params: str) -> NoReturn:
    """Refuse the request for one reason. Arguments: as `Fault`. Raises RefusedError."""
    raise RefusedError((Fault(code=code, field=field, given=given[:64], params=params, fix=fix),))


def checked(fields: Fields) -> None:
    """Refuse the envelope where one of its keys is wrong or unknown. Raises RefusedError."""
    fields.finish()
    if fields.faults:
        raise RefusedError(tuple(fields.faults))


def job_source(envelope: Source) -> Source:
    """The job of the envelope, decoded, not yet read. Raises RefusedError where there is none."""
    job = envelope.get("job")
    if not isinstance(job, Mapping):
        refuse("object-expected", "job", str(job), "send-again")
    check_job_size(job)
    if "format" not in job:
        refuse("format-unknown", "format", "", "use-format", format=JOB_FORMAT)
    return job


def eye_of(envelope: Source) -> Eye:
    """The eye that the envelope names. Raises RefusedError where it names none."""
    eye = envelope.get("eye")
    if eye not in EYES:
        refuse("choice-unknown", "eye", str(eye), "choose-one", allowed=", ".join(EYES))
    return "right" if eye == "right" else "left"
