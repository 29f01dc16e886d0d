"""Asks for what nobody said of a lens's body: once for the job where both lenses want the same."""

from collections.abc import Iterator, Mapping

from pycore.optics.prism import Eye
from pycore.sections.answer import Ask

Taken = Mapping[Eye, Mapping[str, str]]


def body_asks(taken: Taken, *, used: bool = True) -> Iterator[Ask]:
    """Asks for fields of the lens.

    Arguments: `taken` for each eye, by field as `lens.index`, the usual value; `used` whether it
    was taken. A value common to all lenses is asked of the job, any other of its eye.
    """
    fields = dict.fromkeys(field for values in taken.values() for field in values)
    for field in fields:
        usual = {eye: values.get(field) for eye, values in taken.items()}
        first, *others = dict.fromkeys(usual.values())
        if first is not None and not others:
            yield Ask(field=field, usual=first, used=used)
            continue
        for eye, value in usual.items():
            if value is not None:
                yield Ask(field=f"{eye}.{field.partition('.')[2]}", usual=value, used=used)
