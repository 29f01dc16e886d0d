"""The section `look`: which further look tells most, and what each result would mean.

In the report, under `look`: {`look`, `eye` (null: the bench or the pair), `sentence`,
`information_bits` (about what happened), `group_bits` (of it, about which group of causes),
`results` [{`result`, `probability`, `sentence`, `leads_to` [{`code`, `eyes`, `with`, `sentence`,
`probability`, `shown`, `text`}]}], `others` [{`look`, `eye`, `information_bits`}]}; absent where no look tells
anything more.
"""

from collections.abc import Iterator, Sequence

from pycore.bench.cause_rank import Label, Ranking
from pycore.bench.cause_weighing import weighing_of
from pycore.bench.look_worth import LEAST_BITS, Offer, Worth, group_bits, worths
from pycore.case import Case
from pycore.decimals import fixed, from_float
from pycore.names import Entry
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.cause_texts import cause_text, named_entry, percent
from pycore.words import say

LEADS_TO = 3  # causes named for each result
OTHERS = 4


def look_section(case: Case) -> SectionAnswer:
    """Answer for one case: the look that tells most about what happened. Arguments: `case`."""
    weighing = weighing_of(case.job, case.dues)
    if weighing is None:
        fields = tuple(Ask(field=f"readings.{eye}.prism") for eye in case.dues)
        return SectionAnswer(title="nothing-read", asks=fields)
    found = [worth for worth in worths(case.job, weighing) if worth.bits >= LEAST_BITS]
    if not found:
        return SectionAnswer(title="none")
    best, *others = found
    results = list(_results(best.offer, weighing.ranking))
    return SectionAnswer(
        title="best",
        title_params={"look": look_text(best.offer)},
        own={
            **_worth_entry(best),
            "group_bits": group_bits(best.offer, weighing),
            "sentence": look_sentence(best.offer),
            "results": results,
            "others": [_worth_entry(worth) for worth in others[:OTHERS]],
        },
        rows=tuple(_rows(results, others)),
        notes=(("tables", {}),),
    )


def look_sentence(offer: Offer) -> Entry:
    """A look as a code of the words `looks` and its parameters. Arguments: `offer`."""
    params = {"eye": say(f"eyes.{offer.eye}")} if offer.eye else {}
    return {"code": offer.table.code, "params": params}


def look_text(offer: Offer) -> str:
    """A look as an instruction. Arguments: `offer`."""
    sentence = look_sentence(offer)
    return say(f"looks.{sentence['code']}", **sentence["params"])


def _worth_entry(worth: Worth) -> Entry:
    return {
        "look": worth.offer.table.code,
        "eye": worth.offer.eye,
        "information_bits": worth.bits,
    }


def _results(offer: Offer, ranking: Ranking) -> Iterator[Entry]:
    """What each result would make of the causes, by Bayes' theorem."""
    rows = [(one.label, one.probability, offer.row(one.label)) for one in ranking.causes]
    for at, result in enumerate(offer.table.results):
        shares = {label: probability * row[at] for label, probability, row in rows}
        whole = sum(shares.values())
        leading = sorted(shares, key=lambda label: -shares[label])[:LEADS_TO]
        yield {
            "result": result,
            "probability": whole,
            "sentence": {"code": f"{offer.table.code}.{result}", "params": {}},
            "leads_to": [_lead(label, shares[label] / whole) for label in leading],
        }


def _lead(label: Label, probability: float) -> Entry:
    shown = percent(probability)
    text = say("cause_texts.with-probability", text=cause_text(label), probability=shown)
    return {**named_entry(label), "probability": probability, "shown": shown, "text": text}


def _rows(results: Sequence[Entry], others: Sequence[Worth]) -> Iterator[Row]:
    for entry in results:
        lead = entry["leads_to"][0]
        result = say(f"look_results.{entry['sentence']['code']}")
        yield Row(
            code="result",
            pair=say("cause_texts.leads-to", result=result, lead=lead["text"]),
        )
    for worth in others[:2]:
        bits = fixed(from_float(worth.bits), 2)
        yield Row(
            code="other",
            pair=say("cause_texts.worth", look=look_text(worth.offer), number=bits),
        )
