"""Why no movement cures a pair, and which lenses are to be made again."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

from pycore.bench.matter import MERIDIAN, PAIR, Matter
from pycore.bench.remedy_least import Limit, Move, allows, held
from pycore.bench.remedy_limits import pieces
from pycore.bench.remedy_search import movable, search
from pycore.bench.remedy_trade import MOST_MM, blank_of_uncut, refusal, trade_limits
from pycore.bench.verdict import Verdict, groups_of
from pycore.bench.verdict_prism import prism_checks
from pycore.decimals import fixed, from_float, signed
from pycore.job.bench import EyeReading
from pycore.optics.prism import EYES, Eye

Trade = Mapping[str, tuple[Limit, ...]]


@dataclass(frozen=True, slots=True)
class Why:
    """A reason: a code with the texts of its sentence; `eye` and `word` are codes themselves."""

    code: str
    params: Mapping[str, str] = field(default_factory=dict)


def is_of_prism(group: str) -> bool:
    """Tell whether a movement can change a group's outcome. Arguments: `group` of checks."""
    return group.startswith(("prism", "prp"))


def why_none(matter: Matter, verdict: Verdict, beside: Sequence[str]) -> Why:
    """Why no movement helps.

    Arguments: `matter`; its `verdict`; `beside` groups that failed beside the prism. Returns the
    reason: what stands in the way, as found by leaving it away.
    """
    if beside:
        check = next(check for check in verdict.checks if check.group == beside[0])
        return Why("not-of-prism", {"check": check.id, "eye": check.eye})
    refused = {eye: code for eye in matter.dues if (code := refusal(matter, eye))}
    eyes = movable(matter)
    guarded = matter.job.decision_rule == "guarded"
    choices = tuple(pieces(matter, verdict.checks, careful=guarded))
    if not choices:
        return Why("uncertain" if guarded else "no-power")
    if eyes:
        trade = trade_limits(matter, eyes)
        if search(choices, [limit for limits in trade.values() for limit in limits], eyes):
            return Why("narrow")
        for name in ("blank", "segment", "far"):
            others = [limit for key, limits in trade.items() if key != name for limit in limits]
            found = search(choices, others, eyes)
            if found:
                return _in_the_way(matter, trade, name, found[0][0])
        found = search(choices, (), eyes)
        if found:
            return _in_the_way(matter, trade, "far", found[0][0])
    for eye, code in sorted(refused.items(), key=lambda item: item[1] == "partner"):
        if not eyes or search(choices, (), (*eyes, eye)):
            return Why(code, {"eye": eye})
    return Why("no-power")


def _in_the_way(matter: Matter, trade: Trade, name: str, move: Move) -> Why:
    """The reason for one thing left away, with the movement that would then do."""
    eye = _eye_in_the_way(trade[name], move)
    start = 2 * EYES.index(eye)
    word = "vertical" if abs(move[start + 1]) > abs(move[start]) else "horizontal"
    params = {"eye": eye, "move": fixed(from_float(_length(move, eye)), 1)}
    if name == "segment":
        return Why("segment", params)
    if name == "blank":
        blank = blank_of_uncut(matter, eye)
        return Why("blank", params | {"blank": str(blank.diameter_mm) if blank else ""})
    power = matter.dues[eye].power
    along = signed(power.along(MERIDIAN[word])) if power else ""
    return Why("far", params | {"word": word, "power": along, "most": f"{MOST_MM:.0f}"})


def _eye_in_the_way(limits: Sequence[Limit], move: Move) -> Eye:
    """The lens whose own limit is broken; where it is the pair's, the one that moves farther."""
    broken = [limit for limit in limits if not allows((limit,), move)]
    still: Mapping[Eye, tuple[int, int]] = {"right": (0, 1), "left": (2, 3)}
    own = [eye for eye in EYES if allows([held(limit, still[eye]) for limit in broken], move)]
    return max(own or EYES, key=lambda eye: _length(move, eye))


def _length(move: Move, eye: Eye) -> float:
    start = 2 * EYES.index(eye)
    return float((move[start] ** 2 + move[start + 1] ** 2) ** 0.5)


def remade_of(matter: Matter, verdict: Verdict) -> tuple[Eye, ...]:
    """The lenses to be made again: as few as bring the pair within, the worse one first.

    Arguments: `matter`; its `verdict`. Returns eyes, the right first. Where the thinning is not
    known no reading says which lens is wrong vertically: then both.
    """
    failed = {name for name, (outcome, _) in verdict.groups.items() if outcome == "outside"}
    checks = [check for check in verdict.checks if check.counts and check.group in failed]
    own = matter.own_eyes
    eyes = {eye for eye in own if any(check.eye == eye for check in checks)}
    known = all(due.vertical_known for due in matter.dues.values())
    if not known and any(check.eye == PAIR for check in checks):
        return own
    by_error = sorted(own, key=lambda eye: -_error_size(matter, eye))
    for eye in by_error:
        if _within(_made_anew(matter, eyes)):
            break
        eyes.add(eye)
    return tuple(eye for eye in EYES if eye in eyes)


def _error_size(matter: Matter, eye: Eye) -> float:
    error = matter.error(eye)
    return float(error.amount) if error else 0.0


def _made_anew(matter: Matter, eyes: set[Eye]) -> Matter:
    """The matter with some lenses as they should be; what was measured on the old ones is gone."""
    reads = {
        eye: matter.dues[eye].expected if eye in eyes else read
        for eye, read in matter.reads.items()
    }
    readings = matter.job.readings
    kept = {eye: EyeReading() if eye in eyes else readings.of(eye) for eye in EYES}
    after = replace(
        readings,
        right=kept["right"],
        left=kept["left"],
        prp_distance_mm=None if eyes else readings.prp_distance_mm,
    )
    return replace(matter, job=replace(matter.job, readings=after), reads=reads)


def _within(matter: Matter) -> bool:
    groups = groups_of(matter, tuple(prism_checks(matter)))
    return all(outcome == "within" for outcome, _ in groups.values())
