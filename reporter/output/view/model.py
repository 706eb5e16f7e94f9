"""The view: what the report shows, as frozen values that are sorted, rounded and worded.

A number is a `Shown`: the key of its ledger entry and its text.  Templates place these values and do nothing
else.  A cell of a table is a `Shown` or a text.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

#: A table of at most so many rows is not broken over pages; one of groups may be longer, so that no group's name
#: stands at the foot of a page without its rows.
KEPT, KEPT_GROUPED = 8, 20


@dataclass(frozen=True, slots=True)
class Shown:
    """One printed number: entry key, rounded text, unit, digits behind the point.

    `pad` is the class of the style sheet that makes up for the decimals missing to the most of its column:
    ``p2`` for two digits, ``q2`` for two digits and the point; a ``k`` before it for a closing bracket.
    """

    key: str
    text: str
    unit: str = ""
    decimals: int = 0
    pad: str = ""


@dataclass(frozen=True, slots=True)
class Cell:
    """A text cell with more to it than its text: the key of the number in it, emphasis, a span.

    A tab in the text stands before what is aligned.
    """

    text: str
    to: str = ""
    strong: bool = False
    span: int = 1


AnyCell = Shown | Cell | str


@dataclass(frozen=True, slots=True)
class Column:
    """One column: heading, unit (printed once, below it), share of the width, whether it holds numbers."""

    title: str
    unit: str = ""
    width: float = 1.0
    number: bool = False


@dataclass(frozen=True, slots=True)
class Row:
    """One row; `anchor` is the key whose derivation row it is; `style` is a class of the style sheet."""

    cells: tuple[AnyCell, ...]
    anchor: str = ""
    style: str = ""


@dataclass(frozen=True, slots=True)
class Table:
    """A table with fixed column widths in percent."""

    columns: tuple[Column, ...]
    rows: tuple[Row, ...]
    caption: str = ""
    note: str = ""

    @property
    def has_heading(self) -> bool:
        """Whether any column has a title."""
        return any(column.title or column.unit for column in self.columns)

    @property
    def is_short(self) -> bool:
        """Whether the table is kept on one page."""
        return len(self.rows) <= (KEPT_GROUPED if self.is_grouped else KEPT)

    @property
    def is_grouped(self) -> bool:
        """Whether rows name groups, each of which is kept on one page."""
        return any(row.style == "group" for row in self.rows)

    @property
    def widths(self) -> tuple[int, ...]:
        """The widths of the columns in whole percent, together 100."""
        whole = sum(column.width for column in self.columns)
        ends = [0.0]
        for column in self.columns:
            ends.append(ends[-1] + column.width * 100 / whole)
        rounded = [round(end) for end in ends]
        return tuple(after - before for before, after in pairwise(rounded))


@dataclass(frozen=True, slots=True)
class Item:
    """A labelled entry, as on a cover or in a list of facts."""

    label: str
    text: str


@dataclass(frozen=True, slots=True)
class Heading:
    """A section of the report: anchor, number and title, as contents and heading print it."""

    anchor: str
    number: str
    title: str


@dataclass(frozen=True, slots=True)
class Picture:
    """An inline SVG and its caption."""

    svg: str
    caption: str = ""


@dataclass(frozen=True, slots=True)
class Cover:
    """Identity of the test and of this report."""

    firm: str
    title: str
    unit: str
    facility: str
    address: str
    days: str
    items: tuple[Item, ...]
    statements: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class LimitView:
    """One limit beside what was measured."""

    anchor: str
    name: str
    heading: str
    relation_words: str
    is_met: bool | None
    facts: tuple[Item, ...]
    picture: Picture | None
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class LimitsView:
    """All limits: a table of runs, averages and margins, more for many runs, and what was entered for each."""

    table: Table | None
    limits: tuple[LimitView, ...]
    lead: str
    more: tuple[Table, ...] = ()


@dataclass(frozen=True, slots=True)
class ProblemView:
    """Problems of one kind in words: grade, what is wrong, what was found, and the cells."""

    grade: str
    title: str
    found: str
    where: str


@dataclass(frozen=True, slots=True)
class QualityView:
    """The outcome of the quality criteria and everything invalid, missing or estimated."""

    lead: str
    table: Table | None
    not_met: tuple[str, ...]
    runs: tuple[str, ...]
    not_applied: tuple[str, ...]
    problems: tuple[ProblemView, ...]
    assumed: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Block:
    """A titled part of a section: text, facts, pictures, tables, lines, notes, in this order.

    `anchor` is the key whose derivation row the text is; `lines` are rows of a sheet set with tabs, so wide
    as `tab` says [mm].
    """

    title: str = ""
    anchor: str = ""
    text: tuple[str, ...] = ()
    facts: tuple[Item, ...] = ()
    tables: tuple[Table, ...] = ()
    pictures: tuple[Picture, ...] = ()
    lines: tuple[str, ...] = ()
    tab: int = 0
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Source:
    """Where a number of a calculation comes from: symbol, number, place in words and the key it leads to.

    The key is empty where the place in words is the whole derivation.
    """

    symbol: str
    value: str
    unit: str
    where: str
    key: str


@dataclass(frozen=True, slots=True)
class Step:
    """One step of the sample calculation.

    `formula` is markup made by the typesetter, `line` the same in one line of text; both are empty where the
    equation stood in an earlier step.  `numbers` is the line with the numbers put in.
    """

    number: int
    title: str
    formula: str
    line: str
    numbers: str
    result: Shown
    basis: str
    citation: str
    sources: tuple[Source, ...]


@dataclass(frozen=True, slots=True)
class Chapter:
    """The steps of the sample calculation that belong to one gas or limit."""

    title: str
    steps: tuple[Step, ...]


@dataclass(frozen=True, slots=True)
class Derivation:
    """One row of the register: entries that differ by run or check alone.

    `name` is their key with a star for the run, `value` their values, `where` the cells or the table of what is
    not computed.
    """

    anchor: str
    name: str
    value: str
    inputs: tuple[Source, ...]
    where: str


@dataclass(frozen=True, slots=True)
class DerivationGroup:
    """The rows of one equation; the rows of what is not computed have none."""

    equation: str
    citation: str
    rows: tuple[Derivation, ...]


@dataclass(frozen=True, slots=True)
class Register:
    """Derivation rows of the printed numbers that are derived nowhere else in the report."""

    groups: tuple[DerivationGroup, ...]
    leaves: tuple[Derivation, ...]


@dataclass(frozen=True, slots=True)
class BoundDocument:
    """A document of the Attachments sheet: what it is, its hash, and its pages where it is bound in."""

    anchor: str
    letter: str
    file: str
    what: str
    sha256: str
    pages: int
    picture: str
    remark: str


@dataclass(frozen=True, slots=True)
class CheckRow:
    """One line of the content checklist: `anchors` lead to the pages where it stands, `words` say what is not there."""

    number: str
    text: str
    anchors: tuple[str, ...]
    words: str


@dataclass(frozen=True, slots=True)
class CheckGroup:
    """A group of the content checklist."""

    title: str
    rows: tuple[CheckRow, ...]


@dataclass(frozen=True, slots=True)
class Signature:
    """A signature block: role, name where known, and what is certified."""

    role: str
    name: str
    words: str


@dataclass(frozen=True, slots=True)
class View:
    """Everything the report shows.  `page_room` is the white space that is kept for the number of a page."""

    title: str
    language: str
    page: str
    draft_mark: str
    report_number: str
    revision: str
    input_hash: str
    firm: str
    headings: Mapping[str, Heading]
    cover: Cover
    limits: LimitsView
    quality: QualityView
    sections: Mapping[str, tuple[Block, ...]]
    sample_lead: str
    sample: tuple[Chapter, ...]
    register: Register
    documents: tuple[BoundDocument, ...]
    checklist: tuple[CheckGroup, ...]
    signatures: tuple[Signature, ...]
    cautions: tuple[str, ...]
    statements: tuple[str, ...]
    places: Mapping[str, str]
    page_room: str
