"""What is done to rows, cells and columns by chance; each says with the file what must come of it."""

from __future__ import annotations

from collections.abc import Callable
from random import Random
from statistics import fmean

from tests.corpus.case import Held
from tests.corpus.draft import Draft

Disturbance = Callable[[Draft, Random], None]
ANY: dict[str, Disturbance] = {}
TEXT: dict[str, Disturbance] = {}
BOOK: dict[str, Disturbance] = {}
_WORDS: tuple[tuple[str, Held, str], ...] = (
    ("ND", ("not detected", None), ""), ("<0.5", ("below a stated value", 0.5), ""), ("OVER", ("over range", None), ""),
    ("CAL", ("calibration", None), ""), ("---", ("blank", None), ""), ("#N/A", ("error value", None), ""),
    ("-999", ("error value", None), ""), ("", ("blank", None), ""), ("1E+30", ("error value", None), ""),
    ("9999", ("error value", None), "error value"), ("purged", ("calibration", None), "calibration"),
    ("2l.O", ("number", 21.0), "21.0"),
)  # fmt: skip


def on(*tables: dict[str, Disturbance]) -> Callable[[Disturbance], Disturbance]:
    """Enter a disturbance under its name."""

    def enter(made: Disturbance) -> Disturbance:
        for table in tables:
            table[made.__name__] = made
        return made

    return enter


# ---- rows -----------------------------------------------------------------------------------------------


@on(ANY)
def title_block(draft: Draft, chance: Random) -> None:
    """Lines above the table."""
    lines = [["Alder Creek Works (invented)"], ["Exported", "2026-04-21 08:00"], ["Range", "0", "100"], [""], ["=1+1"]]
    draft.above = lines[: chance.randint(1, 5)]


@on(ANY)
def rows_lost(draft: Draft, chance: Random) -> None:
    """A gap."""
    start = chance.randrange(5, 40)
    for moment, _ in draft.lines[start : start + 7]:
        draft.held.pop(moment, None)
    gone = {moment for moment, _ in draft.lines[start : start + 7]}
    draft.lines = [line for line in draft.lines if line[0] not in gone]
    draft.more = [column[: len(draft.lines)] for column in draft.more]


@on(ANY)
def newest_first(draft: Draft, chance: Random) -> None:
    """The rows upside down."""
    draft.lines.reverse()


@on(ANY)
def blocks_exchanged(draft: Draft, chance: Random) -> None:
    """A part of the rows before the others."""
    cut = chance.randrange(1, len(draft.lines) - 1)
    draft.lines = [*draft.lines[cut:], *draft.lines[:cut]]


@on(ANY)
def rows_twice(draft: Draft, chance: Random) -> None:
    """Some rows again, as they are."""
    start = chance.randrange(len(draft.lines) - 8)
    copies = [(moment, list(cells)) for moment, cells in draft.lines[start : start + chance.randint(1, 8)]]
    draft.lines = [*draft.lines, *copies]
    draft.more = [[*column, *column[: len(copies)]] for column in draft.more]


@on(ANY)
def row_twice_changed(draft: Draft, chance: Random) -> None:
    """A time with two readings: must stop."""
    moment, _ = chance.choice(draft.lines)
    draft.lines.append((moment, [77.77] * 4))
    draft.more = [[*column, column[0]] for column in draft.more]
    draft.held[moment] = [("number", float("nan"))] * 4  # nothing equals it: this file may not be read


@on(ANY)
def text_rows(draft: Draft, chance: Random) -> None:
    """Rows of text between the readings."""
    for at in chance.sample(range(2, 30), 3):
        draft.between[at] = [chance.choice(["PORT B", "Pause, probe moved", "Run 2", "- - -", ""])]


@on(ANY)
def header_again(draft: Draft, chance: Random) -> None:
    """The header row between the readings."""
    if len(draft.headers) == 1:
        draft.between[chance.randrange(10, 30)] = draft._heads()[0]


@on(ANY)
def averages(draft: Draft, chance: Random) -> None:
    """Averages at the foot, with a word or without."""
    columns = zip(*(cells for _, cells in draft.lines), strict=True)
    means = [fmean(cell for cell in column if isinstance(cell, float)) for column in columns]
    shown = [f"{mean:.2f}".replace(".", draft.decimal) for mean in means]
    draft.below.append([chance.choice(["Average", "Mean", "", "Mittelwert"]), *shown])


@on(ANY)
def wrong_average(draft: Draft, chance: Random) -> None:
    """An average that is none."""
    draft.below.append([chance.choice(["Average", "Total"]), "12.3", "45.6", "7.8", "9.1"])


# ---- cells ----------------------------------------------------------------------------------------------


@on(ANY)
def word_in_cell(draft: Draft, chance: Random) -> None:
    """Words in some cells."""
    for written, held, answer in chance.sample(_WORDS, 2):
        at = chance.randrange(1, len(draft.lines))
        draft.set(at, chance.randrange(2), written, held)
        if answer:
            draft.answers[f"word.{written}"] = answer


@on(ANY)
def drifted_zero(draft: Draft, chance: Random) -> None:
    """Readings below zero."""
    value = -chance.randint(1, 40) / 100
    draft.set(chance.randrange(len(draft.lines)), chance.randrange(4), value, ("number", value))


@on(ANY)
def above_air(draft: Draft, chance: Random) -> None:
    """Oxygen above that of air."""
    draft.set(chance.randrange(len(draft.lines)), 2, 21.3, ("number", 21.3))


@on(ANY)
def stuck(draft: Draft, chance: Random) -> None:
    """A channel that stands still."""
    start, column = chance.randrange(len(draft.lines) - 15), chance.randrange(4)
    value = draft.lines[start][1][column]
    if isinstance(value, float):
        for at in range(start, start + 12):
            draft.set(at, column, value, ("number", value))


# ---- columns --------------------------------------------------------------------------------------------


def _renamed(draft: Draft, *names: str) -> None:
    draft.headers = [[draft.headers[0][0], *names, *draft.headers[0][5:]]]


@on(ANY)
def other_spelling(draft: Draft, chance: Random) -> None:
    """Other words for the gases."""
    _renamed(draft, *chance.choice([
        ("Oxides ppm dry", "Carbon monoxide ppmvd", "02% dry", "C02 % dry"),
        ("NO_x ppmvd", "CO ppmvd", "Oxygen (% dry)", "Carbon dioxide (% dry)"),
        ("NOₓ [ppm tr]", "CO [ppm tr]", "Sauerstoff [% tr]", "Kohlendioxid [% tr]"),
        ("NOx ppm seco", "Monóxido de carbono ppm seco", "Oxígeno % seco", "CO2 % seco"),
    ]))  # fmt: skip


@on(ANY)
def no_basis(draft: Draft, chance: Random) -> None:
    """Neither dry nor wet in the headers."""
    _renamed(draft, "NOx ppm", "CO ppm", "O2 %", "CO2 %")
    draft.answers["column.*.basis"] = "dry"


@on(ANY)
def no_unit(draft: Draft, chance: Random) -> None:
    """No unit in the headers."""
    _renamed(draft, "NOx dry", "CO dry", "O2 dry", "CO2 dry")
    draft.answers |= {"column.B.unit": "ppm", "column.C.unit": "ppm"}


@on(ANY)
def units_below(draft: Draft, chance: Random) -> None:
    """Units in a row of their own."""
    more = [""] * (len(draft.headers[0]) - 5)
    draft.headers = [
        ["Time", "NOx", "CO", "O2", "CO2", *draft.headers[0][5:]],
        ["", "ppm dry", "ppm dry", "% dry", "% dry", *more],
    ]


def _more(draft: Draft, header: str, cells: list[str]) -> None:
    draft.more.append(cells)
    draft.headers = [[*row, header if at == 0 else ""] for at, row in enumerate(draft.headers)]


@on(ANY)
def corrected_column(draft: Draft, chance: Random) -> None:
    """NOx corrected to 3 % oxygen, beside the column as measured."""
    cells = []
    for _, (nox, _, oxygen, _) in draft.lines:
        numeric = isinstance(nox, float) and isinstance(oxygen, float)
        cells.append(f"{nox * 17.9 / (20.9 - oxygen):.2f}".replace(".", draft.decimal) if numeric else "")  # type: ignore[operator]
    _more(draft, chance.choice(["NOx @3% O2", "NOx ppm dry corr", "NOx ppm dry"]), cells)


@on(ANY)
def notes_column(draft: Draft, chance: Random) -> None:
    """A column of notes that look like formulas."""
    _more(draft, "Note", [f"{'=+-@'[at % 4]}note" for at in range(len(draft.lines))])


@on(ANY)
def second_analyzer(draft: Draft, chance: Random) -> None:
    """A second column of NOx: never chosen quietly."""
    _more(draft, "NOx B [ppm dry]", ["31.5"] * len(draft.lines))
    draft.answers["gas.nox.columns"] = "B"
