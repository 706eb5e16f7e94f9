"""What is done to times, text and workbooks by chance; each says with the file what must come of it."""

from __future__ import annotations

from datetime import datetime, timedelta
from random import Random

from tests.corpus.disturbances import ANY, BOOK, TEXT, on
from tests.corpus.draft import Draft

_NAMES = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")


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
