"""The sections of the report beside order and verdict: one question, one module each.

The list is `SECTIONS`; a section's name is its module here and in `bench`, its picture in
`scenes`, its key in the report, its words.
"""

from collections.abc import Callable, Mapping, Sequence

from pycore.case import Case
from pycore.names import Entry, spoken
from pycore.sections.answer import SectionAnswer
from pycore.sections.colour import colour_section
from pycore.sections.edge import edge_section
from pycore.sections.field import field_section
from pycore.sections.layout import layout_section
from pycore.sections.near import near_section
from pycore.sections.split import split_section
from pycore.sections.surfacing import surfacing_section
from pycore.sections.thinning import thinning_section
from pycore.sections.wear import wear_section

SECTIONS: Mapping[str, Callable[[Case], SectionAnswer]] = {
    "layout": layout_section,
    "field": field_section,
    "edge": edge_section,
    "thinning": thinning_section,
    "split": split_section,
    "near": near_section,
    "wear": wear_section,
    "surfacing": surfacing_section,
    "colour": colour_section,
}


def add_sections(report: Entry, case: Case, wanted: Sequence[str], *, scenes: bool) -> None:
    """Work the wanted sections out and put each where the report has it.

    Arguments: `report` to add to; `case`; `wanted` names; `scenes` whether to add pictures.
    """
    for name in wanted:
        answer = SECTIONS[name](case)
        if answer.own is not None:
            report[name] = answer.own
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
