"""The section `edge`: thickness round the rim of both lenses, and what would change it.

In the report, under `edge`: for each eye `profile` [[angle_deg, thickness_mm], …] at the boxing
centre, `thinnest` and `thickest` with their angle and place, `nasal_mm`, `temporal_mm`, `top_mm`,
`bottom_mm`, `centre_mm` at the prism reference point, `governs` (what that thickness is due to),
`weight_g`, `wedge_deg` exact and `wedge_thin_deg`; `weight_g` of the pair; `options`, each what
the pair would be after one change.
"""

import math
from collections.abc import Callable, Iterator, Mapping

from pycore.bench.edge import Edge, Framing, edge_of
from pycore.bench.edge_options import Option, options_of
from pycore.case import Case
from pycore.decimals import fixed, from_float
from pycore.names import Entry, plain, thinning_text
from pycore.optics.prism import Eye
from pycore.optics.surface import OutsideSurfaceError
from pycore.optics.wedge import thin_wedge_tangent, wedge_tangent
from pycore.scenes.edge import edge_scene
from pycore.sections.answer import Row, SectionAnswer
from pycore.sections.framing import (
    asks_for,
    edge_summary,
    framings_of,
    grams,
    material_rows,
    millimetres,
    place_code,
    place_text,
    rounded,
    row_of,
    takes_usual_values,
    tenths,
)
from pycore.words import say

SIDES = (("nasal", 0.0), ("temporal", 180.0), ("top", 90.0), ("bottom", 270.0))
SHORT_MM = 0.005  # of a minimum: what the last figure shown cannot tell
Notes = list[tuple[str, Mapping[str, str]]]


def edge_section(case: Case) -> SectionAnswer:
    """Answer for one case: how thick, where, why, how heavy. Arguments: `case`."""
    framings = framings_of(case)
    asks = asks_for(framings.values(), case.job)
    if not framings:
        return SectionAnswer(title="frame-missing", asks=asks)
    edges: dict[Eye, Edge] = {}
    notes: Notes = []
    for eye, framing in framings.items():
        try:
            edges[eye] = edge_of(framing.lens, case.dues[eye].expected)
        except OutsideSurfaceError:
            notes.append(("beyond-surface", {"eye": eye}))
    if not edges:
        return SectionAnswer(title="beyond-surface", asks=asks, notes=tuple(notes))
    framings = {eye: framings[eye] for eye in edges}
    options = options_of(framings, case.dues)
    worst = max(edges, key=lambda eye: edges[eye].thickest[1])
    angle_deg, mm = edges[worst].thickest
    return SectionAnswer(
        title="thickest",
        title_params={"number": tenths(mm), "eye": worst, "place": place_text(worst, angle_deg)},
        own=_own(case, framings, edges, options),
        rows=tuple(_rows(case, framings, edges, options)),
        asks=asks,
        notes=(*notes, *_notes(case, framings, edges)),
        draw=lambda: {
            eye: edge_scene(framings[eye].lens, case.dues[eye].expected, edge, _marks(edge))
            for eye, edge in edges.items()
        },
    )


def _marks(edge: Edge) -> tuple[str, str]:
    return millimetres(edge.thickest[1]), millimetres(edge.thinnest[1])


def _own(
    case: Case,
    framings: Mapping[Eye, Framing],
    edges: Mapping[Eye, Edge],
    options: list[Option],
) -> Entry:
    own: Entry = {eye: _lens_entry(case, eye, framings[eye], edges[eye]) for eye in edges}
    own["weight_g"] = rounded(_together(edges))
    own["options"] = [
        {
            "kind": option.kind,
            "figures": [float(figure) for figure in option.figures],
            "needs_agreement": option.kind == "split",
            "thickest_mm": rounded(_thickest(option.edges)),
            "weight_g": rounded(_together(option.edges)),
            **{eye: edge_summary(edge) for eye, edge in option.edges.items()},
        }
        for option in options
    ]
    return own


def _lens_entry(case: Case, eye: Eye, framing: Framing, edge: Edge) -> Entry:
    amount, index = float(case.dues[eye].expected.amount), framing.lens.solid.index
    entry: Entry = {
        "profile": [[angle_deg, rounded(mm)] for angle_deg, mm in edge.profile],
        "thinnest": _place_entry(eye, edge.thinnest),
        "thickest": _place_entry(eye, edge.thickest),
    }
    for name, angle_deg in _sides(eye):
        entry[f"{name}_mm"] = rounded(edge.at(angle_deg))
    return entry | {
        "centre_mm": rounded(edge.centre_mm),
        "governs": edge.governs,
        "weight_g": rounded(edge.weight_g),
        "volume_mm3": rounded(edge.volume_mm3),
        "index": index,
        "front_curve": float(framing.values.front_curve),
        "wedge_deg": rounded(_degrees(wedge_tangent(amount, index))),
        "wedge_thin_deg": rounded(_degrees(thin_wedge_tangent(amount, index))),
    }


def _place_entry(eye: Eye, found: tuple[float, float]) -> Entry:
    angle_deg, mm = found
    place = place_code(eye, angle_deg)
    return {"thickness_mm": rounded(mm), "angle_deg": angle_deg, "place": place}


def _sides(eye: Eye) -> list[tuple[str, float]]:
    """The four sides with their angles; on the left lens the nose is at 180 degrees."""
    return [(name, angle if eye == "right" else (180.0 - angle) % 360.0) for name, angle in SIDES]


def _degrees(tangent: float) -> float:
    return math.degrees(math.atan(tangent))


def _thickest(edges: Mapping[Eye, Edge]) -> float:
    return max(edge.thickest[1] for edge in edges.values())


def _together(edges: Mapping[Eye, Edge]) -> float | None:
    weights = [edge.weight_g for edge in edges.values() if edge.weight_g is not None]
    return sum(weights) if len(weights) == len(edges) else None


def _rows(
    case: Case,
    framings: Mapping[Eye, Framing],
    edges: Mapping[Eye, Edge],
    options: list[Option],
) -> Iterator[Row]:
    def row(code: str, text: Callable[[Eye, Edge], str], pair: str = "") -> Row:
        return row_of(code, {eye: text(eye, edge) for eye, edge in edges.items()}, pair)

    yield row("thickest", lambda eye, edge: _found_text(eye, edge.thickest))
    yield row("thinnest", lambda eye, edge: _found_text(eye, edge.thinnest))
    for number, (name, _) in enumerate(SIDES):
        sides = {eye: edge.at(_sides(eye)[number][1]) for eye, edge in edges.items()}
        yield row_of(name, {eye: millimetres(mm) for eye, mm in sides.items()})
    yield row("centre", lambda _, edge: millimetres(edge.centre_mm))
    yield row("governs", lambda _, edge: say(f"governs.{edge.governs}"))
    yield row("weight", lambda _, edge: grams(edge.weight_g), grams(_together(edges)))
    yield row("wedge", lambda eye, _: _wedge_text(case, eye, framings[eye]))
    for option in options:
        yield _option_row(option)
    yield from material_rows(framings)


def _found_text(eye: Eye, found: tuple[float, float]) -> str:
    return say("text.thick-at", number=tenths(found[1]), place=place_text(eye, found[0]))


def _wedge_text(case: Case, eye: Eye, framing: Framing) -> str:
    amount, index = float(case.dues[eye].expected.amount), framing.lens.solid.index
    exact, thin = wedge_tangent(amount, index), thin_wedge_tangent(amount, index)
    shown = [fixed(from_float(_degrees(tangent)), 2) for tangent in (exact, thin)]
    return say("text.wedge", exact=shown[0], thin=shown[1])


def _option_row(option: Option) -> Row:
    """Each lens's thickest edge after the change; what it is, and the pair's weight."""
    texts = {eye: millimetres(edge.thickest[1]) for eye, edge in option.edges.items()}
    text = thinning_text if option.kind == "thinning" else plain
    parts = [*map(text, option.figures), grams(_together(option.edges))]
    return row_of(f"option-{option.kind}", texts, ", ".join(filter(None, parts)))


def _notes(case: Case, framings: Mapping[Eye, Framing], edges: Mapping[Eye, Edge]) -> Notes:
    notes: Notes = []
    for eye, edge in edges.items():
        lens = framings[eye].lens
        if edge.least_mm <= 0:
            notes.append(("crossed", {"eye": eye}))
        elif edge.thinnest[1] < lens.minimum_edge_mm - SHORT_MM:
            params = {"number": tenths(edge.thinnest[1]), "minimum": tenths(lens.minimum_edge_mm)}
            notes.append(("below-minimum", {"eye": eye, **params}))
        if not case.dues[eye].vertical_known:
            notes.append(("thinning-unknown", {"eye": eye}))
    if any(framing.lens.solid.add for framing in framings.values()):
        notes.append(("addition-estimated", {}))
    if any(framing.lens.rim.holes for framing in framings.values()):
        notes.append(("holes-usual", {}))
    if takes_usual_values(framings.values()):
        notes.append(("usual-from-memory", {}))
    return notes
