"""Every sentence, by code, in the language of the request; the page's builder reads the same files."""

import json
from collections.abc import Mapping
from contextvars import ContextVar
from functools import cache, lru_cache
from typing import Any

from pycore.data import package_text

LANGUAGES = ("en", "de")  # a file of words each; the first where a request asks for none
# Held by the context of one request, so that no function between door and sentence hands it on.
_spoken: ContextVar[str] = ContextVar("spoken", default=LANGUAGES[0])


def speak(language: str) -> None:
    """From here on, in this context, sentences are in a language. Arguments: `language`.

    >>> speak("de"), say("directions.in"), speak("en")
    (None, 'innen', None)
    """
    _spoken.set(language)


def spoken_language() -> str:
    """The language in which sentences are now: for what is remembered with its text.

    >>> spoken_language()
    'en'
    """
    return _spoken.get()


@cache
def table(language: str = LANGUAGES[0]) -> Mapping[str, Any]:
    """All words of a language, group by group. Arguments: `language` of `LANGUAGES`.

    >>> "errors" in table()
    True
    """
    words: Mapping[str, Any] = json.loads(package_text(f"words/{language}.json"))
    return words


def say(code: str, **params: str) -> str:
    """The sentence of a code with its holes filled; the code itself where there is none.

    Arguments: `code` as group.name; `params` texts. Returns text in the language spoken.

    >>> say("directions.in")
    'in'
    >>> say("no.such-code")
    'no.such-code'
    """
    sentence = _sentence(_spoken.get(), code)
    for key, value in params.items():
        sentence = sentence.replace("{" + key + "}", value)
    return sentence


@lru_cache(maxsize=4000)
def _sentence(language: str, code: str) -> str:
    group, _, name = code.partition(".")
    sentence = table(language).get(group, {}).get(name)
    return sentence if isinstance(sentence, str) else code
