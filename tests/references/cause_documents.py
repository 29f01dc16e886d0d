"""The simulated order as a job document without readings. Numbers as text, as they are typed."""

from __future__ import annotations

from typing import Any

from tests.references.cause_orders import (
    SEGMENT_BELOW_MM,
    SEGMENT_CENTRE_BELOW_TOP_MM,
    SEGMENT_INSET_MM,
    THINNED,
    LensOrder,
    PairOrder,
)

Job = dict[str, Any]


def signed(value: float) -> str:
    """A power as typed: "+0.25", "-1.00", "0.00"."""
    return f"{value:+.2f}" if round(value, 2) else "0.00"


def document(pair: PairOrder) -> Job:
    """The pair as a job."""
    thinning: Job = {"rule": pair.rule}
    if pair.rule == "amount":
        thinning |= {"amount": f"{pair.thinning_amount:.2f}", "base": "down"}
    job: Job = {
        "format": "wedgewright.job/1",
        "state": pair.state,
        "lens": {"design": pair.design},
        "frame": dict(zip(("a_mm", "b_mm", "dbl_mm"), map(str, pair.box_mm), strict=True)),
        "instrument": {
            "kind": pair.bench.kind,
            "prism_step": str(pair.bench.prism_step),
            "compensator": "lens-prism",
            "compensator_maximum": "15",
            "uncertainty": {name: str(getattr(pair.bench, name)) for name in ("prism", "power_d", "axis_deg", "position_mm")},
            "zero_uncertainty": str(pair.bench.zero),
        },
    }
    if pair.design in THINNED:
        job["thinning"] = thinning
    for lens in pair.lenses:
        job[lens.eye] = target(lens.asked or lens) | {"pd_mm": str(lens.pd_mm), "prp_height_mm": str(lens.height_mm)}
        if lens.asked:
            job[lens.eye]["stated"] = target(lens)
        if pair.design == "bifocal":
            job[lens.eye]["segment"] = {
                "shape": "flat-top", "width_mm": "28", "inset_mm": str(SEGMENT_INSET_MM), "height_mm": str(lens.height_mm - SEGMENT_BELOW_MM),
                "centre_below_top_mm": str(SEGMENT_CENTRE_BELOW_TOP_MM),
            }  # fmt: skip
        if pair.design == "progressive":
            job[lens.eye] |= {"cross_above_prp_mm": str(lens.cross_mm), "fitting_height_mm": str(lens.height_mm + lens.cross_mm)}
    return job


def target(lens: LensOrder) -> Job:
    """Powers, add and prism of one lens, as typed."""
    typed: Job = {"sphere": signed(lens.sphere), "cylinder": signed(lens.cylinder)}
    typed["prism"] = [{"amount": f"{amount:.2f}", "base": base} for amount, base in lens.components] or [
        {"amount": "0", "base": "0"}
    ]
    if lens.cylinder:
        typed["axis"] = str(lens.axis_deg)
    if lens.add:
        typed["add"] = f"{lens.add:.2f}"
    return typed
