"""The sections of the report beside order and verdict: one question, one module each.

The list is `SECTIONS`; a section's name is its module here and in `bench`, its picture in
`scenes`, its key in the report, its words. A module is loaded when its section is first asked
for, so that the page's start does not wait for what nobody has opened.
"""

from collections.abc import Callable, Mapping, Sequence

from pycore.case import Case
from pycore.names import Entry, spoken
from pycore.sections.answer import SectionAnswer


def _layout(case: Case) -> SectionAnswer:
    from pycore.sections.layout import layout_section

    return layout_section(case)


def _field(case: Case) -> SectionAnswer:
    from pycore.sections.field import field_section

    return field_section(case)


def _edge(case: Case) -> SectionAnswer:
    from pycore.sections.edge import edge_section

    return edge_section(case)


def _thinning(case: Case) -> SectionAnswer:
    from pycore.sections.thinning import thinning_section

    return thinning_section(case)


def _split(case: Case) -> SectionAnswer:
    from pycore.sections.split import split_section

    return split_section(case)


def _near(case: Case) -> SectionAnswer:
    from pycore.sections.near import near_section

    return near_section(case)


def _wear(case: Case) -> SectionAnswer:
    from pycore.sections.wear import wear_section

    return wear_section(case)


def _surfacing(case: Case) -> SectionAnswer:
    from pycore.sections.surfacing import surfacing_section

    return surfacing_section(case)


def _colour(case: Case) -> SectionAnswer:
    from pycore.sections.colour import colour_section

    return colour_section(case)


def _causes(case: Case) -> SectionAnswer:
    from pycore.sections.causes import causes_section

    return causes_section(case)


def _look(case: Case) -> SectionAnswer:
    from pycore.sections.look import look_section

    return look_section(case)


def _remedy(case: Case) -> SectionAnswer:
    from pycore.sections.remedy import remedy_section

    return remedy_section(case)


SECTIONS: Mapping[str, Callable[[Case], SectionAnswer]] = {
    "layout": _layout,
    "field": _field,
    "edge": _edge,
    "thinning": _thinning,
    "split": _split,
    "near": _near,
    "wear": _wear,
    "surfacing": _surfacing,
    "colour": _colour,
    "causes": _causes,
    "look": _look,
    "remedy": _remedy,
}


def add_sections(report: Entry, case: Case, wanted: Sequence[str], *, scenes: bool) -> None:
    """Work the wanted sections out and put each where the report has it.

    Arguments: `report` to add to; `case`; `wanted` names; `scenes` whether to add pictures.
    """
    for name in wanted:
        answer = SECTIONS[name](case)
        if answer.own is not None:
            report[name] = answer.own
        report.update(answer.more)
        for eye, entry in answer.eyes.items():
            report[eye][name] = entry
        report.setdefault("sections", {})[name] = {
            "title": {"code": f"{name}.{answer.title}", "params": spoken(answer.title_params)},
            "rows": [row.entry(name) for row in answer.rows],
            "asks": [ask.entry() for ask in answer.asks],
            "notes": [
                {"code": f"{name}.{code}", "params": spoken(params)}
                for code, params in answer.notes
            ],
        }
        drawn = answer.scenes if scenes else {}
        if drawn:
            report["scenes"][name] = dict(drawn)
