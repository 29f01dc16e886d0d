"""The causes ranked: hypotheses that say the same put together, ties named, places summed."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from pycore.bench.cause_bench import Bench, Story
from pycore.bench.cause_fit import Key
from pycore.bench.cause_table import AS_ORDERED, NONE_OF_THESE, PLACES, CauseTable
from pycore.optics.prism import Eye

Eyes = tuple[Eye, ...]
WORTH_TYING = 2e-4  # the probability above which ties are looked for


@dataclass(frozen=True, slots=True, order=True)
class Named:
    """A cause with the lenses it is in."""

    code: str
    eyes: Eyes


Label = tuple[Named, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Ranked:
    """One cause, or two together, with its probability.

    `label` what happened; `stories` its variants; `tied_with` the causes that predict the same.
    """

    label: Label
    probability: float
    stories: tuple[Story, ...]
    tied_with: tuple[Label, ...]


@dataclass(frozen=True, slots=True)
class Group:
    """Causes that predict the same for this job: only priors and looks speak between them.

    `shares` are the parts of the group's probability that its causes have.
    """

    labels: tuple[Label, ...]
    shares: tuple[float, ...]

    @property
    def probability(self) -> float:
        """The probability of the whole group."""
        return sum(self.shares)


@dataclass(frozen=True, slots=True, kw_only=True)
class Ranking:
    """All causes, groups and places with their probabilities, each list the greatest first."""

    causes: tuple[Ranked, ...]
    groups: tuple[Group, ...]
    places: tuple[tuple[str, float], ...]


def label_of(story: Story) -> Label:
    """What a hypothesis says has happened: the lenses' own causes, then the shared one."""
    eyes = tuple(story.own)
    causes: dict[str, list[Eye]] = {}
    for eye, own in story.own.items():
        if own.code != AS_ORDERED:
            causes.setdefault(own.code, []).append(eye)
    named = [Named(code, tuple(where)) for code, where in causes.items()]
    if story.common.code != AS_ORDERED:
        named = [one for one in named if one.code != story.common.code]
        named.append(Named(story.common.code, eyes))
    if len(eyes) == 1:  # which of two causes of one lens is shared, nobody sees
        named.sort()
    return tuple(named) or (Named(AS_ORDERED, eyes),)


def rank(bench: Bench, stories: Sequence[Story]) -> Ranking:
    """Put the hypotheses together. Arguments: `bench`; `stories` weighed."""
    told: dict[Label, list[Story]] = {}
    for story in stories:
        told.setdefault(label_of(story), []).append(story)
    eyes = tuple(bench.gauges)
    for code in (AS_ORDERED, NONE_OF_THESE):
        if not any(len(label) == 1 and label[0].code == code for label in told):
            told[(Named(code, eyes),)] = []
    groups = _groups(bench, stories)
    ties = _ties(groups, told)
    ranked = [
        Ranked(
            label=label,
            probability=sum([story.probability for story in own]),
            stories=tuple(own),
            tied_with=ties.get(label, ()),
        )
        for label, own in told.items()
    ]
    return Ranking(
        causes=tuple(sorted(ranked, key=lambda one: -one.probability)),
        groups=tuple(sorted(groups, key=lambda group: -group.probability)),
        places=_places(told, bench.table),
    )


def _groups(bench: Bench, stories: Sequence[Story]) -> list[Group]:
    """Hypotheses by what they predict; those that stand alone by what they say."""
    keyed: dict[Key, dict[Label, float]] = {}
    alone: dict[Label, float] = {}
    for story in stories:
        label = label_of(story)
        if story.probability < WORTH_TYING:
            alone[label] = alone.get(label, 0.0) + story.probability
            continue
        shares = keyed.setdefault(bench.key(story), {})
        shares[label] = shares.get(label, 0.0) + story.probability
    groups = []
    for shares in keyed.values():
        if len(shares) > 1:
            items = sorted(shares.items(), key=lambda item: -item[1])
            groups.append(Group(*map(tuple, zip(*items, strict=True))))
        else:
            for label, share in shares.items():
                alone[label] = alone.get(label, 0.0) + share
    return groups + [Group((label,), (share,)) for label, share in alone.items()]


def _ties(
    groups: Sequence[Group], told: Mapping[Label, Sequence[Story]]
) -> dict[Label, tuple[Label, ...]]:
    """For each cause the others of the likeliest group it is in."""
    ties: dict[Label, tuple[Label, ...]] = {}
    for group in sorted(groups, key=lambda group: -group.probability):
        for label in group.labels:
            if label in told and label not in ties:
                ties[label] = tuple(other for other in group.labels if other != label)
    return ties


def _places(
    told: Mapping[Label, Sequence[Story]], table: CauseTable
) -> tuple[tuple[str, float], ...]:
    """The probability by place; of two causes at different places each place has a half."""
    sums = dict.fromkeys(PLACES, 0.0)
    for label, stories in told.items():
        probability = sum([story.probability for story in stories])
        for named in label:
            place = AS_ORDERED if named.code == AS_ORDERED else table.causes[named.code].place
            sums[place] += probability / len(label)
    return tuple(sorted(sums.items(), key=lambda item: -item[1]))
