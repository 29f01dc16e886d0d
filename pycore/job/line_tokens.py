"""Cuts one line of trade notation into words and numbers. Nothing typed is dropped unseen:
what has no meaning here becomes a token of kind "refused", which the grammar must report."""

import re
from dataclasses import dataclass, replace

MAXIMUM_DIGITS = 12
PRISM, DEGREES, MILLIMETRES, DIOPTRES = "Δ", "°", "mm", "D"
QUADRANTS = ("up in", "up out", "down in", "down out")

_BLANK = r"[^\S\n\r\x0b\x0c\x85\u2028\u2029]"
_TOKEN = re.compile(
    rf"""(?P<line>[\n\r\x0b\x0c\x85\u2028\u2029]+)
    |(?P<blank>{_BLANK}+)
    |(?P<list>,(?=[0-9]+[.,][0-9])|,(?![0-9])|[;:=()])
    |(?P<number>(?P<sign>(?:[-+\u2212\u2013]{_BLANK}*)*)
        (?P<body>[0-9]+(?:[.,][0-9]+)*[¼½¾]?|[.,][0-9]+|[¼½¾]))
    |(?P<word>[A-Za-z](?:\.[A-Za-z])+\.?(?![A-Za-z])|[A-Za-z]+)
    |(?P<stop>(?<=[A-Za-z0-9°º½¼¾)])\.(?![0-9.]))
    |(?P<at>@)|(?P<axis>[×*])|(?P<slash>/)|(?P<amp>&)|(?P<plus>\+)
    |(?P<refused>.)""",
    re.VERBOSE | re.DOTALL,
)
# A unit belongs to the number before it. "pd" is told apart later: it is a distance too.
_UNIT = re.compile(
    rf"""{_BLANK}*(?:(?P<Δ>[Δ∆△^])|(?P<degrees>[°º]|deg(?:rees)?(?![A-Za-z]))
    |(?P<mm>mm(?![A-Za-z]))|(?P<D>[Dd](?![A-Za-z]|\.[A-Za-z])))""",
    re.VERBOSE,
)
_POINT_AND_GAP = re.compile(rf"\.{_BLANK}+[0-9.,]+")
_COMMA_AND_GAP = re.compile(rf",{_BLANK}+[0-9]+(?![0-9.,])")
_DECIMAL_COMMA = re.compile(r"[0-9],[0-9]")
_QUARTERS = {"¼": "25", "½": "5", "¾": "75"}

_WORDS_OF = {
    ("eye", "right"): "r re od right",
    ("eye", "left"): "l le os left",
    ("eye", "both"): "ou be both",
    ("base", "in"): "bi in",
    ("base", "out"): "bo out",
    ("base", "up"): "bu up",
    ("base", "down"): "bd down dn",
    ("letter", "in"): "i",
    ("letter", "out"): "o",
    ("letter", "up"): "u",
    ("letter", "down"): "d",
    ("based", ""): "base",
    ("plano", "0.00"): "pl plano",
    ("sph", ""): "sph sphere ds",
    ("cyl", ""): "cyl cylinder dc",
    ("axis", ""): "x ax axis",
    ("add", ""): "add addition",
    ("pd", "pd_mm"): "pd",
    ("height", "fitting_height_mm"): "fh",
    ("height", ""): "height ht sh",
    ("of", "fitting_height_mm"): "fitting",
    ("of", "prp_height_mm"): "prp",
    ("each", ""): "each ea per",
    ("total", ""): "total pair combined split together",
    ("design", "progressive"): "progressive progressives",
    ("design", "bifocal"): "bifocal bifocals",
    ("design", "trifocal"): "trifocal trifocals",
    ("design", "single-vision"): "sv",
    ("single", ""): "single",
    ("vision", ""): "vision",
    ("amp", ""): "and",
    ("blank", ""): "eye eyes lens lenses with prism",
}
_WORDS = {word: key for key, words in _WORDS_OF.items() for word in words.split()}


@dataclass(frozen=True, slots=True, kw_only=True)
class Token:
    """One word or number of the line.

    Arguments: `kind` what it is; `value` its plain text (a number's digits, a base, an eye, the
    code of a refusal); `start`, `end` its place in the line; `sign` + or - or ""; `unit` of a
    number ("Δ", "°", "mm", "D" or ""); `comma` whether it was written with a decimal comma.
    """

    kind: str
    value: str = ""
    start: int = 0
    end: int = 0
    sign: str = ""
    unit: str = ""
    comma: bool = False


def _plain_digits(body: str) -> str:
    """The digits with a decimal point, without needless zeros in front."""
    quarter = _QUARTERS.get(body[-1], "")
    if quarter:
        body = body[:-1] + "." + quarter
    whole, point, decimals = body.replace(",", ".").partition(".")
    return (whole.lstrip("0") or "0") + point + decimals


def _number_refused(text: str, found: re.Match[str], signs: str) -> str:
    """Why this number cannot be read for certain: a code, or ""."""
    body = found["body"]
    separators = [character for character in body if character in ".,"]
    before = text[found.start() - 1 : found.start()]
    if len(signs) > 1:
        return "line-sign-double"
    if sum(character.isdigit() for character in body) > MAXIMUM_DIGITS:
        return "line-number-too-long"
    if len(separators) + (body[-1] in _QUARTERS) > 1:
        return "line-number-unclear"
    if body[0] in ".," and not signs and (body[0] == "," or before.isalnum()):
        return "line-number-unclear"
    whole, comma, decimals = body.partition(",")
    if comma and len(decimals) == 3 and whole.strip("0"):
        return "line-number-unclear"  # 1,000: a thousand, or one?
    return ""


def _read_number(text: str, found: re.Match[str]) -> Token:
    """One number with its sign and unit."""
    signs = re.sub(r"\s", "", found["sign"]).replace("\u2212", "-").replace("\u2013", "-")
    body, start, end = found["body"], found.start(), found.end()
    refused = _number_refused(text, found, signs)
    gap = _POINT_AND_GAP.match(text, end)
    if not gap and signs and _DECIMAL_COMMA.search(text):
        gap = _COMMA_AND_GAP.match(text, end)  # -2, 25 where commas are decimal signs
    if gap and body.isdigit():
        refused, end = refused or "line-number-unclear", gap.end()
    if refused:
        return Token(kind="refused", value=refused, start=start, end=end)
    unit = _UNIT.match(text, end)
    name = unit.lastgroup or "" if unit else ""
    return Token(
        kind="number",
        value=_plain_digits(body),
        start=start,
        end=unit.end() if unit else end,
        sign=signs,
        unit=DEGREES if name == "degrees" else name,
        comma="," in body,
    )


def _read_word(found: re.Match[str]) -> list[Token]:
    """One word by its meaning; DCx and cylx are two words written as one."""
    word, start, end = found[0].replace(".", "").lower(), found.start(), found.end()
    if word in ("dcx", "cylx"):
        cyl = Token(kind="cyl", start=start, end=end - 1)
        return [cyl, Token(kind="axis", start=end - 1, end=end)]
    kind, value = _WORDS.get(word, ("refused", "line-not-understood"))
    return [Token(kind=kind, value=value, start=start, end=end)]


def _cut(text: str) -> list[Token]:
    """The tokens as they stand, before words that belong together are joined."""
    tokens: list[Token] = []
    place = 0
    while found := _TOKEN.match(text, place):
        kind = found.lastgroup or ""
        if kind == "number":
            tokens.append(_read_number(text, found))
        elif kind == "word":
            tokens += _read_word(found)
        else:
            value = "line-not-understood" if kind == "refused" else ""
            tokens.append(Token(kind=kind, value=value, start=place, end=found.end()))
        place = tokens[-1].end
    return [token for token in tokens if token.kind not in ("blank", "list", "stop")]


def _join_two(first: Token, second: Token) -> list[Token] | None:
    """Two neighbours that mean one thing, joined; None where they do not."""
    kinds = (first.kind, second.kind)
    if kinds in (("based", "base"), ("based", "letter")):
        return [replace(second, kind="base", start=first.start)]
    if kinds == ("based", "number"):
        return [replace(first, kind="at", value="base"), second]
    if kinds == ("based", "at"):
        return [replace(second, value="base", start=first.start)]
    if kinds == ("of", "height"):
        return [replace(first, kind="height", end=second.end)]
    if kinds == ("single", "vision"):
        return [replace(first, kind="design", value="single-vision", end=second.end)]
    return None


def _join_three(first: Token, second: Token, third: Token) -> list[Token] | None:
    """`BD & I` is one base, `3 pd BI` one amount with its unit; None where neither."""
    if first.kind == "base" and second.kind in ("amp", "slash", "plus"):
        pair = {first.value, third.value} if third.kind in ("base", "letter") else set()
        words = " ".join(word for word in ("up", "down", "in", "out") if word in pair)
        if words in QUADRANTS:
            unit = "letter" if third.kind == "letter" else ""
            return [replace(first, kind="quadrant", value=words, end=third.end, unit=unit)]
    if (first.kind, second.kind) != ("number", "pd") or first.unit or third.kind == "number":
        return None
    if first.sign and third.kind not in ("base", "quadrant", "at"):
        return None  # a power, then a distance without its number
    return [replace(first, unit=PRISM, end=second.end), third]


def tokens_of(text: str) -> list[Token]:
    """Cut a line into tokens and join the words that belong together; the last is the end.

    Arguments: `text` as typed. Returns tokens whose numbers have no unit but what was written.

    >>> [(token.kind, token.value) for token in tokens_of("OD −2,25 BD & I")]
    [('eye', 'right'), ('number', '2.25'), ('quadrant', 'down in'), ('end', '')]
    """
    joined: list[Token] = []
    for token in [*_cut(text), Token(kind="end", start=len(text), end=len(text))]:
        joined.append(token)
        if len(joined) > 2 and (three := _join_three(*joined[-3:])):
            joined[-3:] = three
        if len(joined) > 1 and (two := _join_two(*joined[-2:])):
            joined[-2:] = two
            # `base down and base in`: the last word is whole only now.
            if len(joined) > 2 and (three := _join_three(*joined[-3:])):
                joined[-3:] = three
    return joined
