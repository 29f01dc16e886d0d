"""The section `look`: which further look tells most, and what each result would mean."""

from pycore.case import Case
from pycore.sections.answer import SectionAnswer


def look_section(case: Case) -> SectionAnswer:
    """stub"""
    return SectionAnswer(title="none")
