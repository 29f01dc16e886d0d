"""Every sentence, by code, from `en.json`; the page's builder reads the same file."""

import json
from collections.abc import Mapping
from functools import cache, lru_cache
from typing import Any

from pycore.data import package_text

LANGUAGE = "en"


@cache
def table(language: str = LANGUAGE) -> Mapping[str, Any]:
    """All words of a language, group by group. Arguments: `language`.

    >>> "errors" in table()
    True
    """
    words: Mapping[str, Any] = json.loads(package_text(f"words/{language}.json"))
    return words


def say(code: str, **params: str) -> str:
    """The sentence of a code with its holes filled; the code itself where there is none.

    Arguments: `code` as group.name; `params` texts. Returns text.

    >>> say("directions.in")
    'in'
    >>> say("no.such-code")
    'no.such-code'
    """
    sentence = _sentence(code)
    for key, value in params.items():
        sentence = sentence.replace("{" + key + "}", value)
    return sentence


@lru_cache(maxsize=2000)
def _sentence(code: str) -> str:
    group, _, name = code.partition(".")
    sentence = table().get(group, {}).get(name)
    return sentence if isinstance(sentence, str) else code
