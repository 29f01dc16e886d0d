"""The section `causes`: what most probably happened, and at which place.

In the report, under `causes`: a list of {`code`, `eyes`, `with` (a second cause that came along,
mostly none), `probability`, `residual` (standard deviations left at the best fit, over the root
of the count of readings; null where not worked out), `estimate` (null or {`kind`, `right`,
`left`, `shown`}), `tied_with` (causes that predict the same readings), `place`, `tell_apart` (null
or {`look`, `eye`, `expect`: [{`result`, `probability_this`, `probability_other`}]}), `sentence`,
`shown`}, the greatest probability first; what is left of 1 is one entry `all-others`. Further
`cause_places` [{`place`, `probability`, `shown`}], `cause_groups` [{`members`, `probability`,
`shown`}] (as they stand in `causes`) and `cause_priors`.
"""

from collections.abc import Iterator, Mapping, Sequence

from pycore.bench.cause_estimate import estimate, size_of
from pycore.bench.cause_rank import Ranked, Ranking
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE
from pycore.bench.cause_weighing import Weighing, weighing_of
from pycore.bench.look_worth import Offer, offers, tell_apart
from pycore.case import Case
from pycore.names import Entry
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.cause_texts import (
    cause_text,
    named_entry,
    percent,
    size_entry,
)
from pycore.words import say

LEAST_ALONE, LEAST_TOGETHER = 1e-4, 5e-3  # below, a cause is counted among all others
SIZED = 0.01  # probability from which a cause's size is worked out


def causes_section(case: Case) -> SectionAnswer:
    """Answer for one case: why the readings differ from what is due. Arguments: `case`."""
    weighing = weighing_of(case.job, case.dues)
    if weighing is None:
        fields = tuple(Ask(field=f"readings.{eye}.prism") for eye in case.dues)
        return SectionAnswer(title="nothing-read", own=[], asks=fields)
    ranking = weighing.ranking
    entries = list(_entries(weighing, offers(case.job, weighing.bench)))
    title, params = _title(ranking)
    return SectionAnswer(
        title=title,
        title_params=params,
        own=entries,
        more={
            "cause_places": [
                {"place": place, "probability": part, "shown": percent(part)}
                for place, part in ranking.places
            ],
            "cause_groups": [
                {
                    "members": [named_entry(label) for label in group.labels],
                    "probability": group.probability,
                    "shown": percent(group.probability),
                }
                for group in ranking.groups
            ],
            "cause_priors": {
                "pseudo_count": weighing.bench.table.pseudo_count,
                "provenance": weighing.bench.table.provenance,
            },
        },
        rows=tuple(_rows(ranking)),
        notes=tuple(_notes(case, weighing)),
    )


def _title(ranking: Ranking) -> tuple[str, Mapping[str, str]]:
    first = ranking.causes[0]
    if first.label[0].code == AS_ORDERED:
        return "as-ordered", {"probability": percent(first.probability)}
    alone = [label for label in first.tied_with if len(label) == 1]  # two at once go without saying
    if alone:
        together = ranking.groups[0].probability
        params = {"count": str(len(alone)), "probability": percent(together)}
        return "tied", {"cause": cause_text(first.label), **params}
    return "likely", {"cause": cause_text(first.label), "probability": percent(first.probability)}


def _entries(weighing: Weighing, offered: Sequence[Offer]) -> Iterator[Entry]:
    """The causes worth a line, then all others together."""
    ranking = weighing.ranking
    shown = [one for one in ranking.causes if _is_worth(one)]
    for one in shown:
        yield _entry(weighing, one, offered)
    rest = max(0.0, 1.0 - sum([one.probability for one in shown]))
    yield {
        "code": "all-others",
        "eyes": [],
        "with": [],
        "probability": rest,
        "residual": None,
        "estimate": None,
        "tied_with": [],
        "place": "none",
        "tell_apart": None,
        "sentence": {"code": "all-others", "params": {}},
        "shown": {"probability": percent(rest), "text": say("causes.all-others")},
    }


def _is_worth(one: Ranked) -> bool:
    if one.label[0].code in (AS_ORDERED, NONE_OF_THESE) and len(one.label) == 1:
        return True
    return one.probability >= (LEAST_ALONE if len(one.label) == 1 else LEAST_TOGETHER)


def _entry(weighing: Weighing, one: Ranked, offered: Sequence[Offer]) -> Entry:
    first, *others = one.label
    table = weighing.bench.table
    sized = one.probability >= SIZED and one.stories
    size = size_of(weighing.bench, first.code, one.stories) if sized and not others else None
    place = AS_ORDERED if first.code == AS_ORDERED else table.causes[first.code].place
    return {
        **named_entry(one.label),
        "probability": one.probability,
        "residual": estimate(weighing.bench, one.stories[0]).residual if sized else None,
        "estimate": size_entry(size) if size else None,
        "tied_with": [named_entry(label) for label in one.tied_with],
        "place": place,
        "tell_apart": _tell_apart(one, weighing.ranking, offered) if sized else None,
        "shown": {"probability": percent(one.probability), "text": cause_text(one.label)},
    }


def _tell_apart(one: Ranked, ranking: Ranking, offered: Sequence[Offer]) -> Entry | None:
    """The look that tells a cause from the most probable other one."""
    other = next(each for each in ranking.causes if each.label != one.label)
    offer = tell_apart(one.label, other.label, offered)
    if offer is None:
        return None
    rows = zip(offer.table.results, offer.row(one.label), offer.row(other.label), strict=True)
    return {
        "look": offer.table.code,
        "eye": offer.eye,
        "other": named_entry(other.label),
        "expect": [
            {"result": result, "probability_this": this, "probability_other": that}
            for result, this, that in rows
        ],
    }


def _rows(ranking: Ranking) -> Iterator[Row]:
    for code, one in zip(("first", "second", "third"), ranking.causes, strict=False):
        text = cause_text(one.label)
        yield Row(code=code, pair=_with_probability(text, one.probability))
    for place, probability in ranking.places:
        if place != AS_ORDERED:
            yield Row(code=place, pair=percent(probability))


def _with_probability(text: str, probability: float) -> str:
    return say("cause_texts.with-probability", text=text, probability=percent(probability))


def _notes(case: Case, weighing: Weighing) -> Iterator[tuple[str, Mapping[str, str]]]:
    yield "verdict-apart", {}
    yield "priors", {"count": str(weighing.bench.table.pseudo_count)}
    if any(order.partner for order in case.job.orders):
        yield "partner", {}
