"""The pair and the verdict as the report writes them, every number with its text."""

from collections.abc import Mapping
from decimal import Decimal

from pycore.bench.doubt import ACCEPTED_DOUBT
from pycore.bench.expected import Due, read_prism, thinning_found
from pycore.bench.matter import PAIR, Check, component_of
from pycore.bench.verdict import Verdict
from pycore.bench.verdict_missing import Missing
from pycore.bench.verdict_prism import COMPONENTS
from pycore.decimals import decimal_places, fixed, places_to_tell_apart, signed, snap
from pycore.editions.edition import Range, Row
from pycore.job.document import Job
from pycore.names import Entry, number, plain, spoken, thinning_text
from pycore.optics.prism import Eye, Prism, vertical_word
from pycore.words import say

CAUTIONS = ("prescriber", "local-law", "sign-off")


def pair_entry(job: Job, dues: Mapping[Eye, Due]) -> Entry | None:
    """The pair, right minus left: vertical + right base up, horizontal + bases in.

    Arguments: `job`; `dues` of the eyes ordered. Returns the entry, or None for a single lens.
    """
    if len(dues) < 2:
        return None
    reads = {eye: read_prism(job, eye) for eye in dues}
    ordered = dues["right"].expected - dues["left"].expected
    right, left = reads["right"], reads["left"]
    read = right - left if right is not None and left is not None else None
    entry: Entry = {
        component: _component_entry(component, ordered, read) for component in COMPONENTS
    }
    found = thinning_found(dues, reads)
    if found is not None:
        entry["thinning_found"] = _thinning_entry(found)
    return entry


def _component_entry(component: str, ordered: Prism, read: Prism | None) -> Entry:
    wanted = component_of(ordered, component)
    seen = None if read is None else component_of(read, component)
    deviation = None if seen is None else seen - wanted
    values = {"ordered": wanted, "read": seen, "deviation": deviation}
    entry: Entry = {
        name: None if value is None else number(value) for name, value in values.items()
    }
    entry["shown"] = {
        name: "" if value is None else _pair_text(component, value)
        for name, value in values.items()
    }
    return entry


def _pair_text(component: str, value: Decimal) -> str:
    """A pair's component with its sense in words: `3.00 right up`, `6.00 in`."""
    sense = "zero" if not snap(value) else "plus" if value > 0 else "minus"
    return say(f"text.pair-{component}-{sense}", amount=fixed(abs(value), 2))


def _thinning_entry(found: Decimal) -> Entry:
    """The thinning found in both lenses, up positive, in prism dioptres."""
    return {
        "amount": number(abs(found)),
        "base": vertical_word(found),
        "shown": thinning_text(found),
    }


def verdict_entry(verdict: Verdict) -> Entry:
    """The verdict with its checks, edition and cautions. Arguments: `verdict`."""
    checks = [_check_entry(verdict, check) for check in verdict.checks]
    tightest = verdict.checks.index(verdict.tightest) if verdict.tightest else None
    return {
        "outcome": verdict.outcome,
        "tightest": tightest,
        "sentence": _sentence(verdict, checks[tightest] if tightest is not None else None),
        "checks": checks,
        "not_checked": [_missing_entry(item) for item in verdict.missing],
        "edition": _edition_entry(verdict),
        "cautions": list(CAUTIONS),
    }


def _check_entry(verdict: Verdict, check: Check) -> Entry:
    group_doubt = verdict.groups[check.group][1] if check.counts else check.doubt
    outcome = verdict.outcome_of(check)
    return {
        "id": check.id,
        "group": check.group,
        "eye": check.eye,
        "component": check.component,
        "ordered": number(check.ordered),
        "read": number(check.read),
        "deviation": number(check.deviation),
        "limit": number(check.limit),
        "margin": number(check.margin),
        "uncertainty": round(check.uncertainty, 9),
        "doubt": round(group_doubt, 9),
        "unit": check.unit,
        "shown": _check_texts(check, group_doubt),
        "outcome": outcome,
        "clause": check.row.clause,
        "provenance": check.row.provenance,
        "row": _row_text(check),
        "measured": check.measured,
        "counts": check.counts,
    }


def _check_texts(check: Check, doubt: float) -> Entry:
    places = 0 if check.unit == "°" else 1 if check.unit == "mm" else 2
    places = places_to_tell_apart(abs(check.deviation), check.limit, places)
    places = max(places, *(_decimals(value) for value in (check.limit, check.deviation)))
    places = min(places, 9)
    texts = {
        "deviation": signed(check.deviation, places),
        "limit": fixed(check.limit, places),
        "margin": fixed(check.margin, places),
        "uncertainty": fixed(Decimal(check.uncertainty), 2),
        "doubt": _percent(doubt),
        **_ordered_and_read(check, places),
    }
    texts["text"] = say(
        "text.check",
        name=check_name(check),
        deviation=fixed(abs(check.deviation), places),
        limit=texts["limit"],
        unit=check.unit,
    )
    return texts


def _decimals(value: Decimal) -> int:
    """The decimals a typed figure has, up to 3; a computed one is not shown in full."""
    places = decimal_places(value)
    return places if places <= 3 else 0


def _ordered_and_read(check: Check, places: int) -> dict[str, str]:
    values = {"ordered": check.ordered, "read": check.read}
    if check.unit == "mm":
        return dict.fromkeys(values, "")
    if check.eye == PAIR:
        return {name: _pair_text(check.component or "", value) for name, value in values.items()}
    if check.component:
        return {name: _component_of_eye(check, value) for name, value in values.items()}
    if check.unit == "D" and check.id != "add":
        return {name: signed(value, places) for name, value in values.items()}
    return {name: fixed(value, places) for name, value in values.items()}


def _component_of_eye(check: Check, value: Decimal) -> str:
    if not snap(value):
        return fixed(value, 2)
    if check.component == "vertical":
        word = "up" if value > 0 else "down"
    else:
        word = "in" if (value > 0) == (check.eye == "right") else "out"
    return say("text.component", amount=fixed(abs(value), 2), word=say(f"directions.{word}"))


def _percent(doubt: float) -> str:
    if doubt < 0.005:
        return "<\u20091 %"
    return f"{doubt * 100:.0f} %"


def check_name(check: Check) -> str:
    """The check's name with its component and eye in words. Arguments: `check`."""
    code = (
        f"{check.id}.{check.component}"
        if check.id == "prism.lens" and check.component
        else check.id
    )
    return say("text.check-name", check=say(f"checks.{code}"), eye=say(f"eyes.{check.eye}"))


def _row_text(check: Check) -> str:
    """The row of the edition in words: for which sizes it holds."""
    row = check.row
    ranges = [
        say(f"rows.{quantity}", range=_range_text(within, quantity))
        for quantity, within in row.ranges.items()
    ]
    return ", ".join([*ranges, _limit_text(row, check.unit)])


def _range_text(within: Range, quantity: str) -> str:
    unit = "\u0394" if quantity == "prism" else "D"
    ends = {"over": within.over, "from": within.start, "below": within.below, "to": within.to}
    return " ".join(
        say(f"rows.{name}", number=plain(end), unit=unit)
        for name, end in ends.items()
        if end is not None
    )


def _limit_text(row: Row, unit: str) -> str:
    parts = []
    if row.fixed:
        parts.append(say("rows.fixed", number=plain(row.fixed), unit=unit))
    if row.per_dioptre:
        parts.append(say("rows.per-dioptre", number=plain(row.per_dioptre), unit=unit))
    return " + ".join(parts)


def _missing_entry(item: Missing) -> Entry:
    params = {key: value for key, value in (("check", item.check), ("eye", item.eye)) if value}
    return {"code": item.code, "params": spoken(params)}


def _sentence(verdict: Verdict, tightest: Entry | None) -> Entry:
    code = verdict.outcome
    params = {"edition": verdict.matter.edition.name}
    if tightest is not None:
        params |= {"tightest": tightest["shown"]["text"], "doubt": tightest["shown"]["doubt"]}
        if verdict.outcome == "within" and tightest["doubt"] > ACCEPTED_DOUBT:
            code = "within-close"
    else:
        code = "nothing-read"
    return {"code": code, "params": params}


def _edition_entry(verdict: Verdict) -> Entry:
    edition, chosen = verdict.matter.edition, verdict.matter.chosen
    return {
        "id": edition.id,
        "name": edition.name,
        "sha256": edition.sha256,
        "provenance": list(edition.provenances),
        "options": [
            {
                "id": name,
                "value": chosen[name],
                "default": chosen[name] == default,
                "why": f"{name}.{chosen[name]}",
            }
            for name, default in edition.options.items()
        ],
        "rule": verdict.matter.job.decision_rule,
    }
