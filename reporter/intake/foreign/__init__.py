"""A file that is not the field workbook: looked at, asked about where it can be read two ways, read by a mapping.

look        tables, columns, times and numbers of a file, each with its evidence, and the open questions
mapping_of  the reading of a look as a mapping, once every question has its answer
apply       a file read by a mapping: readings, what was left out and why, problems
"""

from reporter.intake.foreign.apply import ForeignReadings, apply
from reporter.intake.foreign.look import Look, look, mapping_of
from reporter.intake.foreign.mapping import Mapping, differences, load, save
from reporter.intake.foreign.model import Option, Question

__all__ = [
    "ForeignReadings",
    "Look",
    "Mapping",
    "Option",
    "Question",
    "apply",
    "differences",
    "load",
    "look",
    "mapping_of",
    "save",
]
