"""What would a careful person query in this order? It warns, with the reason; it never alters.

Every rule is common practice unless its comment names a source.
"""

from collections.abc import Iterator
from decimal import Decimal

from pycore.bench.expected import smaller_add
from pycore.decimals import fixed, snap
from pycore.errors import Note
from pycore.job.document import Job
from pycore.job.order import EyeOrder
from pycore.optics.power import Power
from pycore.optics.prism import EYES, Prism, horizontal_word

MUCH_PRISM = Decimal(10)
BEYOND_THIN = Decimal(20)  # thin-prism formulas end about here (domain facts section 8)
THINNING_SHARE = (Decimal("0.57"), Decimal("0.70"))  # around 0.6 and 2/3 of the add
ADD_DESIGNS = ("progressive", "bifocal", "trifocal")
STATED_STEP = Decimal("0.50")  # dioptres
FAR_APART = Decimal(3)  # dioptres of mean power


def order_notes(job: Job) -> list[Note]:
    """Everything worth a query in an order. Arguments: `job`. Returns Notes, about order."""
    notes: list[Note] = []
    for order in job.orders:
        notes += _lens_notes(order)
    if len(job.orders) == 2:
        right, left = job.orders
        notes += _pair_notes(job, right, left)
    notes += _job_notes(job)
    return notes


def _warn(code: str, field: str, **params: str) -> Note:
    return Note(code=code, field=field, params=params, severity="warning")


def _lens_notes(order: EyeOrder) -> Iterator[Note]:
    eye, target = order.eye, order.prescribed
    amount = snap(target.prism_total.amount)
    if amount > BEYOND_THIN:
        yield _warn("prism-beyond-thin", f"{eye}.prism", eye=eye, amount=fixed(amount, 2))
    elif amount > MUCH_PRISM:
        yield _warn("prism-much", f"{eye}.prism", eye=eye, amount=fixed(amount, 2))
    parts = [part for part in target.prism or () if part.amount]
    words = {part.word for part in parts}
    if {"in", "out"} <= words or {"up", "down"} <= words:
        yield _warn("prism-opposed-in-lens", f"{eye}.prism", eye=eye)
    for part in target.prism or ():
        if not part.amount and part.word:
            yield _warn("prism-zero-with-base", f"{eye}.prism", eye=eye)
    if order.lens.design == "progressive" and not target.add and not order.partner:
        yield _warn("progressive-without-add", f"{eye}.add", eye=eye)
    elif order.lens.design in ADD_DESIGNS and not target.add and not order.partner:
        yield _warn("multifocal-without-add", f"{eye}.add", eye=eye)
    if order.lens.design in ("single-vision", "near") and target.add:
        yield _warn("single-vision-with-add", f"{eye}.add", eye=eye)
    if target.power and not all(
        value % Decimal("0.125") in (0, Decimal("0.005"), Decimal("0.12"))
        for value in (abs(target.power.sphere), abs(target.power.cylinder))
    ):
        yield _warn("power-odd-step", f"{eye}.sphere", eye=eye)
    if order.lens.design == "near" and order.pd_mm is not None and order.pd_for != "near":
        yield _warn("near-pair-distance-pd", f"{eye}.pd_mm", eye=eye)
    if order.stated and order.stated.power and target.power:
        yield from _stated_notes(order, order.stated.power, target.power)


def _stated_notes(order: EyeOrder, stated: Power, power: Power) -> Iterator[Note]:
    """Stated values replace the prescription in every check, so a large step is queried."""
    yield Note(code="stated-values-used", field=f"{order.eye}.stated", params={"eye": order.eye})
    if abs(stated.strongest - power.strongest) > STATED_STEP:
        yield _warn("stated-far-from-order", f"{order.eye}.stated", eye=order.eye)


def _pair_notes(job: Job, right: EyeOrder, left: EyeOrder) -> Iterator[Note]:
    if right.partner or left.partner:
        return
    of_right, of_left = right.prescribed.prism_total, left.prescribed.prism_total
    yield from _vertical_notes(job, of_right, of_left)
    words = {horizontal_word("right", of_right.x), horizontal_word("left", of_left.x)}
    if words == {"in", "out"}:
        yield _warn("horizontal-in-and-out", "left.prism")
    if (right.prescribed.add or 0) != (left.prescribed.add or 0):
        yield _warn("adds-differ", "left.add")
    if right.prescribed.power and left.prescribed.power:
        yield from _power_notes(right.prescribed.power, left.prescribed.power)
    if right.lens.design != left.lens.design:
        yield _warn("designs-differ", "lens.design")


def _vertical_notes(job: Job, right: Prism, left: Prism) -> Iterator[Note]:
    add = smaller_add(job)
    if right.y and left.y and (right.y > 0) == (left.y > 0):
        word = "up" if right.y > 0 else "down"
        yield _warn("vertical-same-way", "left.prism", word=word)
        share = abs(right.y) / add if add else Decimal(0)
        if right.y < 0 and right.y == left.y and THINNING_SHARE[0] <= share <= THINNING_SHARE[1]:
            yield _warn(
                "thinning-in-prescription",
                "right.prism",
                amount=fixed(abs(right.y), 2),
                add=fixed(add or Decimal(0), 2),
            )
    elif snap(right.y) and snap(left.y) and snap(right.y) != snap(-left.y):
        yield _warn("vertical-not-even", "left.prism")


def _power_notes(right: Power, left: Power) -> Iterator[Note]:
    means = [power.sphere + power.cylinder / 2 for power in (right, left)]
    plus = [min(power.principal) > 0 for power in (right, left)]
    minus = [max(power.principal) < 0 for power in (right, left)]
    if (plus[0] and minus[1]) or (minus[0] and plus[1]):
        yield _warn("powers-opposite-sign", "left.sphere")
    elif abs(means[0] - means[1]) > FAR_APART:
        yield _warn("powers-far-apart", "left.sphere")


def _job_notes(job: Job) -> Iterator[Note]:
    if not any(order.lens.design for order in job.orders):
        if smaller_add(job) is not None:
            yield Note(code="design-missing", field="lens.design", severity="ask")
        else:
            yield Note(code="design-taken-single-vision", field="lens.design")
    for eye in EYES:
        order = job.order(eye)
        if order is None:
            yield Note(code="eye-not-ordered", field=eye, params={"eye": eye})
        elif order.prescribed.power is None and not order.partner:
            yield Note(
                code="power-missing", field=f"{eye}.sphere", params={"eye": eye}, severity="ask"
            )
    for order in job.orders:
        yield from _height_notes(job, order)
    distances = [order.pd_mm for order in job.orders if order.pd_mm is not None]
    if job.pd_mm is not None and len(distances) == 2 and sum(distances) != job.pd_mm:
        yield _warn("pds-disagree", "pd_mm")
    if job.edition is None:
        yield Note(code="edition-missing", field="edition", severity="ask", about="verdict")
    if job.instrument.uncertainty.assumed:
        prism = fixed(job.instrument.uncertainty.prism, 2)
        field = "instrument.uncertainty"
        yield Note(
            code="uncertainty-assumed", field=field, about="instrument", params={"prism": prism}
        )


def _height_notes(job: Job, order: EyeOrder) -> Iterator[Note]:
    """Fitting height, reference point height and the design's distance between them (mm)."""
    cross, fitting, height = order.cross_above_prp_mm, order.fitting_height_mm, order.prp_height_mm
    if (
        cross is not None
        and fitting is not None
        and height is not None
        and fitting - height != cross
    ):
        yield _warn("heights-disagree", f"{order.eye}.prp_height_mm", eye=order.eye)
    if (
        order.lens.design == "progressive"
        and fitting is not None
        and height is None
        and cross is None
    ):
        field = f"{order.eye}.cross_above_prp_mm"
        yield Note(
            code="cross-height-missing", field=field, params={"eye": order.eye}, severity="ask"
        )
    if job.frame.b_mm is not None and height is not None and height > job.frame.b_mm:
        yield _warn("height-above-frame", f"{order.eye}.prp_height_mm", eye=order.eye)
