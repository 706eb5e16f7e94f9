"""What is done to a file by chance; each says with the file what must come of it."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime, timedelta
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
_NAMES = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")


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
    moment, cells = chance.choice(draft.lines)
    other = list(cells)
    other[chance.randrange(4)] = 77.77
    draft.lines.append((moment, other))
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


# ---- times ----------------------------------------------------------------------------------------------


@on(ANY)
def over_midnight(draft: Draft, chance: Random) -> None:
    """A test that goes over midnight."""
    draft.shift = lambda moment: moment + timedelta(hours=13)


@on(ANY)
def early_in_month(draft: Draft, chance: Random) -> None:
    """A day that may be a month."""
    draft.shift = lambda moment: moment - timedelta(days=15)


@on(ANY)
def day_first(draft: Draft, chance: Random) -> None:
    """Day before month."""
    form = chance.choice(["%d/%m/%Y %H:%M", "%d.%m.%Y %H:%M:%S", "%d-%m-%y %H:%M"])
    draft.clock = lambda moment: moment.strftime(form)
    draft.answers["date-order"] = "day first"


@on(ANY)
def month_first(draft: Draft, chance: Random) -> None:
    """Month before day, and a clock of twelve hours."""
    draft.clock = lambda moment: f"{moment:%m/%d/%Y %I:%M} {'AM' if moment.hour < 12 else 'PM'}"
    draft.answers["date-order"] = "month first"


@on(ANY)
def month_in_words(draft: Draft, chance: Random) -> None:
    """The name of the month."""
    draft.clock = lambda moment: f"{moment.day:02d}-{_NAMES[moment.month - 1]}-{moment.year} {moment:%H:%M}"


@on(ANY)
def date_apart(draft: Draft, chance: Random) -> None:
    """Date and time in two columns."""
    draft.clock = lambda moment: [f"{moment:%Y-%m-%d}", f"{moment:%H:%M}"]


@on(ANY)
def in_utc(draft: Draft, chance: Random) -> None:
    """Stamps in UTC, to be converted."""
    draft.clock = lambda moment: f"{moment + timedelta(hours=6):%Y-%m-%dT%H:%M:%S}Z"
    draft.answers["time-zone"] = "America/Denver"


@on(ANY)
def at_24(draft: Draft, chance: Random) -> None:
    """Midnight as 24:00, and a test that reaches it."""
    draft.shift = lambda moment: moment + timedelta(hours=13, minutes=chance_minutes)
    chance_minutes = chance.choice([0, 30, 11])

    def clock(moment: datetime) -> str:
        midnight = moment.hour == moment.minute == 0
        return f"{moment - timedelta(days=1):%Y-%m-%d} 24:00" if midnight else f"{moment:%Y-%m-%d %H:%M}"

    draft.clock = clock


@on(ANY)
def times_alone(draft: Draft, chance: Random) -> None:
    """No date."""
    draft.clock = lambda moment: f"{moment:%H:%M}"
    draft.answers["day"] = "test date"


# ---- text -----------------------------------------------------------------------------------------------


@on(TEXT)
def delimiter(draft: Draft, chance: Random) -> None:
    """Another delimiter."""
    draft.delimiter = chance.choice(["\t", ";", "|"])


@on(TEXT)
def encoding(draft: Draft, chance: Random) -> None:
    """Another encoding, with a sign that needs it."""
    draft.encoding = chance.choice(["utf-8-sig", "utf-16", "utf-16-be", "cp1252", "mac_roman"])
    draft.above.append(["Line 120 °C"])


@on(TEXT)
def decimal_comma(draft: Draft, chance: Random) -> None:
    """Decimal commas; with a comma as delimiter too that must stop."""
    draft.decimal = ","
    if draft.delimiter == "," and chance.random() < 0.8:
        draft.delimiter = ";"


@on(TEXT)
def thousands(draft: Draft, chance: Random) -> None:
    """A mark between thousands."""
    draft.group = chance.choice([" ", "'", "\u00a0", "." if draft.decimal == "," else ","])
    if draft.delimiter == ",":
        draft.delimiter = ";"


@on(TEXT)
def quoted(draft: Draft, chance: Random) -> None:
    """Every number in quotation marks."""
    draft.around = '"{}"'


@on(TEXT)
def odd_blanks(draft: Draft, chance: Random) -> None:
    """Blanks that are none."""
    draft.around = "\u00a0{} "


@on(TEXT)
def ends_of_lines(draft: Draft, chance: Random) -> None:
    """Other ends of lines."""
    draft.end = chance.choice(["\r\n", "\r", "\n\n"])


@on(TEXT)
def cut_off(draft: Draft, chance: Random) -> None:
    """A last line that breaks off."""
    draft.last = f"{draft.clock(datetime(2026, 4, 20, 13, 0))}{draft.delimiter}24"


@on(TEXT)
def cell_too_many(draft: Draft, chance: Random) -> None:
    """A delimiter too many in one row: must stop, or stand where it does no harm."""
    moment, _ = chance.choice(draft.lines)
    draft.broken = moment
    draft.held[moment] = [("number", float("nan"))] * 4


@on(TEXT, BOOK)
def time_last(draft: Draft, chance: Random) -> None:
    """The time in the last column."""
    draft.time_last = True


@on(TEXT)
def one_other_mark(draft: Draft, chance: Random) -> None:
    """One cell with the other decimal mark: must stop."""
    moment, cells = chance.choice(draft.lines)
    cells[0] = "24.17" if draft.decimal == "," else "24,17"
    draft.held[moment][0] = ("number", 24.17)


# ---- workbooks ------------------------------------------------------------------------------------------


@on(BOOK)
def typed_times(draft: Draft, chance: Random) -> None:
    """Date cells."""
    draft.clock = lambda moment: moment


@on(BOOK)
def numbers_as_text(draft: Draft, chance: Random) -> None:
    """Numbers stored as text."""
    for _, cells in draft.lines:
        cells[:] = [f"{cell:.2f}" if isinstance(cell, float) else cell for cell in cells]


@on(BOOK)
def hidden_row(draft: Draft, chance: Random) -> None:
    """A hidden row, which is read."""
    draft.hidden_row = True


@on(BOOK)
def sheet_for_each_run(draft: Draft, chance: Random) -> None:
    """A sheet for each run."""
    draft.sheets = "many"


@on(BOOK)
def stacked(draft: Draft, chance: Random) -> None:
    """Tables below each other."""
    draft.sheets = "stacked"
