"""The section `wear`: what the eye gets from the lens as it is worn, and the lens that would do.

For outside callers, under the eye: `effective` and `compensated`, each a power and a prism (under
`power` and `prism`, and their own fields beside them as well); `tilt`; `stated_used`.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.body import BodyValues, body_values
from pycore.bench.expected import Due, thinning_of
from pycore.bench.wear import Act, Fit, Worn, fit_of, power_difference, worn_lens
from pycore.case import Case
from pycore.decimals import fixed, from_float, snap
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.names import Entry, degrees_text, number, power_entry, power_text, prism_entry
from pycore.optics.power import Power
from pycore.optics.prism import NO_PRISM, Eye, Prism
from pycore.optics.tilt import BeyondError
from pycore.sections.answer import Ask, Row, SectionAnswer
from pycore.sections.body_asks import body_asks
from pycore.sections.framing import body_in_rim
from pycore.sections.wear_picture import wear_pictures
from pycore.words import say

# The usual figures to offer where nobody measured (facts section 6, from memory).
OFFERED = {
    "wear.pantoscopic_deg": "8",
    "wear.wrap_deg": "5",
    "wear.vertex_tested_mm": "12",
    "wear.vertex_worn_mm": "12",
}
BODY_FIELDS = ("lens.index", "lens.front_curve", "lens.centre_thickness_mm")
LARGE_TILT_DEG = 25.0  # beyond it the thin-lens matrix is a guide only; common practice
OFF_MATRIX_D = Decimal("0.10")  # from which the matrix and a pencil of rays are told apart here
HUNDREDTH = Decimal("0.01")


@dataclass(frozen=True, slots=True, kw_only=True)
class _Lens:
    """One lens thought through: as made, as prescribed, what it gives, what would be needed."""

    order: EyeOrder
    due: Due
    body: BodyValues
    worn: Worn
    made: Act
    wanted: Act
    effective: Act
    compensated: Act
    pencils: Mapping[str, Power]

    @property
    def off_matrix(self) -> Decimal:
        """How far pencils of rays are from the powers by the matrix, at most, in dioptres."""
        matrix = {"effective": self.effective.power, "compensated": self.wanted.power}
        differences = [power_difference(matrix[code], it) for code, it in self.pencils.items()]
        return max(differences, default=Decimal(0))

    @property
    def off_power(self) -> Decimal:
        """How far the power as worn is from the prescription, in dioptres."""
        return power_difference(self.effective.power, self.wanted.power)

    @property
    def off_prism(self) -> Decimal:
        """How far the prism as worn is from the prescription, in prism dioptres."""
        return (self.effective.prism - self.wanted.prism).amount

    @property
    def tilted(self) -> bool:
        """Tell whether the front is tilted at all."""
        return self.worn.tilt.axis_deg is not None


Lenses = Mapping[Eye, _Lens]


def wear_section(case: Case) -> SectionAnswer:
    """The section. Arguments: `case`. Returns the answer, in dioptres and prism dioptres."""
    fit = fit_of(case.job.wear)
    if fit is None:
        asks = tuple(Ask(field=field, usual=usual) for field, usual in OFFERED.items())
        return SectionAnswer(title="unknown", asks=asks)
    lenses, beyond = dict[Eye, _Lens](), list[Eye]()
    for eye, due_ in case.dues.items():
        order = case.job.order(eye)
        body = body_values(order, case.job.frame) if order else None
        if order is None or body is None or due_.power is None:
            continue
        try:
            lenses[eye] = _lens(case.job, order, due_, body_in_rim(case, eye, body), fit)
        except BeyondError:
            beyond.append(eye)
    worst = max(lenses.values(), key=lambda lens: lens.off_power + lens.off_prism, default=None)
    own = {eye: _entry(eye, lens) for eye, lens in lenses.items()}
    return SectionAnswer(
        title=_title(worst, beyond),
        title_params=_title_params(worst) if worst else {},
        own={str(eye): entry for eye, entry in own.items()} or None,
        rows=tuple(_rows(lenses, fit, own)),
        asks=tuple(_asks(lenses, fit)),
        notes=(*_notes(lenses, fit), *(("beyond", {"eye": eye}) for eye in beyond)),
        draw=lambda: wear_pictures(
            case, fit, [(lens.worn, lens.made, lens.effective) for lens in lenses.values()]
        ),
    )


def _lens(job: Job, order: EyeOrder, due_: Due, body: BodyValues, fit: Fit) -> _Lens:
    thinning = due_.thinning or NO_PRISM
    if order.verified.includes_thinning:
        thinning = thinning_of(job, order.eye) or NO_PRISM
    worn = worn_lens(order.eye, body, thinning, fit)
    power = order.verified.power or Power(Decimal(0))
    made = Act(power=power, prism=due_.expected - thinning)
    wanted = Act(power=order.prescribed.power or power, prism=order.prescribed.prism_total)
    compensated = worn.lens_for(wanted)
    lenses = (
        {"effective": made, "compensated": compensated} if worn.tilt.axis_deg is not None else {}
    )
    return _Lens(
        order=order,
        due=due_,
        body=body,
        worn=worn,
        made=made,
        wanted=wanted,
        effective=worn.effect_of(made),
        compensated=compensated,
        pencils={code: worn.pencil_power(lens) for code, lens in lenses.items()},
    )


def _title(worst: _Lens | None, beyond: list[Eye]) -> str:
    if worst is None:
        return "beyond" if beyond else "unknown"
    if max(worst.off_power, worst.off_prism) < HUNDREDTH / 2:
        return "as-prescribed"
    return "stated-off" if worst.due.stated_used else "off"


def _title_params(worst: _Lens) -> dict[str, str]:
    return {
        "eye": worst.order.eye,
        "power": fixed(worst.off_power, 2),
        "prism": fixed(worst.off_prism, 2),
    }


def _entry(eye: Eye, lens: _Lens) -> Entry:
    tilt = lens.worn.tilt
    return {
        "effective": _act_entry(eye, lens.effective),
        "compensated": _act_entry(eye, lens.compensated),
        "stated_used": lens.due.stated_used,
        "held": "front-pole",
        "pencil": {code: power_entry(power) for code, power in lens.pencils.items()},
        "tilt": {
            "angle_deg": number(from_float(tilt.angle_deg)),
            "axis_deg": None if tilt.axis_deg is None else number(from_float(tilt.axis_deg)),
            "torsion_deg": number(from_float(tilt.torsion_deg)),
        },
    }


def _act_entry(eye: Eye, act: Act) -> Entry:
    """Exact numbers, their texts to 0.01 D and whole degrees."""
    power, shown = power_entry(act.power), power_entry(_rounded(act.power))
    for form in ("plus_form", "minus_form"):
        power[form]["shown"] = shown[form]["shown"]
    power["shown"]["text"] = shown["shown"]["text"]
    prism = prism_entry(eye, act.prism)
    beside = {key: value for key, value in (power | prism).items() if key != "shown"}
    return beside | {"power": power, "prism": prism, "shown": {"text": _act_text(power, prism)}}


def _act_text(power: Entry, prism: Entry) -> str:
    return f"{power['shown']['text']}  {prism['shown']['text']}"


def _rounded(power: Power) -> Power:
    axis = power.axis.quantize(Decimal(1)) or Decimal(180)
    return Power(power.sphere.quantize(HUNDREDTH), power.cylinder.quantize(HUNDREDTH), axis)


def _rows(lenses: Lenses, fit: Fit, own: Mapping[Eye, Entry]) -> Iterator[Row]:
    if not lenses:
        return
    assumed = bool(fit.usual) or any(_body_asks(lenses))
    stated = any(lens.due.stated_used for lens in lenses.values())
    made = "stated" if stated else "ordered"
    powers = {eye: power_text(lens.made.power) for eye, lens in lenses.items()}
    yield _row(f"{made}-power", powers, False)
    prisms = {eye: _prism_text(eye, lens.made.prism) for eye, lens in lenses.items()}
    yield _row(f"{made}-prism", prisms, False)
    for code in ("effective", "compensated"):
        shown = {eye: entry[code] for eye, entry in own.items()}
        powers = {eye: entry["power"]["shown"]["text"] for eye, entry in shown.items()}
        yield _row(f"{code}-power", powers, assumed)
        traced = {eye: lens.pencils[code] for eye, lens in lenses.items() if lens.tilted}
        if traced:
            texts = {eye: power_text(_rounded(power)) for eye, power in traced.items()}
            yield _row(f"{code}-pencil", texts, assumed)
        prisms = {eye: entry["prism"]["shown"]["text"] for eye, entry in shown.items()}
        yield _row(f"{code}-prism", prisms, assumed)
    if stated:
        yield _row("stated-off", {eye: _stated_off(lens) for eye, lens in lenses.items()}, assumed)
    tilted = {eye: lens for eye, lens in lenses.items() if lens.tilted}
    if tilted:
        yield _row("tilt", {eye: _tilt_text(lens) for eye, lens in tilted.items()}, bool(fit.usual))
        classical = {eye: lens.worn.classical_prism(lens.made) for eye, lens in tilted.items()}
        texts = {eye: _prism_text(eye, prism) for eye, prism in classical.items()}
        yield _row("classical-prism", texts, assumed)


def _row(code: str, texts: Mapping[Eye, str], assumed: bool) -> Row:
    return Row(code=code, right=texts.get("right", ""), left=texts.get("left", ""), assumed=assumed)


def _prism_text(eye: Eye, prism: Prism) -> str:
    text: str = prism_entry(eye, prism)["shown"]["text"]
    return text


def _stated_off(lens: _Lens) -> str:
    """The maker's stated values beside the lens worked out here: how far apart they are."""
    if not lens.due.stated_used:
        return ""
    power = power_difference(lens.made.power, lens.compensated.power)
    prism = (lens.made.prism - lens.compensated.prism).amount
    return ", ".join(
        (
            say("text.dioptres", number=fixed(power, 2)),
            say("text.prism-dioptres", number=fixed(prism, 2)),
        )
    )


def _tilt_text(lens: _Lens) -> str:
    """The whole tilt and its axis, and what it turns the lens in its own plane."""
    tilt = lens.worn.tilt
    parts = [
        say("text.degrees", number=degrees_text(tilt.angle_deg)),
        f"\u00d7{degrees_text(tilt.axis_deg or 0.0)}",
    ]
    torsion = from_float(tilt.torsion_deg)
    if snap(torsion):
        parts.append(f"({say('text.degrees', number=fixed(torsion, 2))})")
    return " ".join(parts)


def _asks(lenses: Lenses, fit: Fit) -> Iterator[Ask]:
    for field, usual in fit.usual.items():
        yield Ask(field=field, usual=usual, used=True)
    yield from _body_asks(lenses)


def _body_asks(lenses: Lenses) -> Iterator[Ask]:
    """What of the lens's body nobody gave; it matters only where the front is tilted."""
    yield from body_asks(
        {
            eye: {field: usual for field, usual in lens.body.usual.items() if field in BODY_FIELDS}
            for eye, lens in lenses.items()
            if lens.tilted
        }
    )


def _notes(lenses: Lenses, fit: Fit) -> Iterator[tuple[str, Mapping[str, str]]]:
    tilted = any(lens.tilted for lens in lenses.values())
    if tilted:
        yield "front-pole", {}
    for eye, lens in lenses.items():
        if lens.off_matrix >= OFF_MATRIX_D:
            yield "matrix-off", {"eye": eye, "power": fixed(lens.off_matrix, 2)}
    if lenses and fit.worn_mm != fit.tested_mm:
        yield "at-tested-distance", {}
    if any(not lens.due.stated_used for lens in lenses.values()):
        yield "not-twice", {}
    for eye, lens in lenses.items():
        if lens.due.stated_used:
            yield "stated-used", {"eye": eye}
        if tilted and (lens.order.lens.aspheric or lens.order.lens.design == "progressive"):
            yield "local-curves", {"eye": eye}
        if lens.worn.tilt.angle_deg > LARGE_TILT_DEG:
            degrees = degrees_text(lens.worn.tilt.angle_deg)
            yield "large-tilt", {"eye": eye, "degrees": degrees}
    if any(not lens.due.vertical_known for lens in lenses.values()):
        yield "thinning-not-known", {}
    elif any(lens.worn.thinning != (0.0, 0.0) for lens in lenses.values()):
        yield "thinning-apart", {}
