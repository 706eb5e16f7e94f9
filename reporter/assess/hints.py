"""What readings look like: hints from several pieces of evidence, each a ledger entry; never a decision.

With oxygen and carbon dioxide alone one number is redundant, so that a fault is seen and not located.  What else
was measured - moisture, the second route of a rate, the direct calibrations, the other runs - tells causes apart as
far as it can.  The words are those of the table ``hint`` of the phrases.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from reporter.combustion.agreement import air_by_moisture, air_by_routes
from reporter.combustion.bare import balance
from reporter.combustion.fuel import nominal_fuel, nominal_names, nominal_reach
from reporter.ledger import Entry, slug
from reporter.methods.method_3b import fuels_holding
from reporter.outcome import Finding
from reporter.output.phrases import load_phrases
from reporter.reduction.agreement import agreement_table, stem
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book

#: Bounds of the direct calibration of the diluents.
_ERRORS = frozenset(f"criterion.{gas}.calibration_error.bound" for gas in ("o2", "co2"))
#: The second route of a rate has its name as the last segment; the rate itself is by the other one.
_ROUTES = ("by_flow", "by_heat_input")


def give_hints(book: Book, abouts: Sequence[RunBook]) -> None:
    """Say what the readings of each run look like, and what those of all runs have in common."""
    differences = [entry for entry in book.ledger if entry.key.endswith(".route_difference")]
    explained = False
    for about in abouts:
        dioxide = _get(book, about, "co2_met")
        if dioxide is not None and dioxide.value != 1.0:
            _off_the_line(book, about)
            explained |= _wet(book, about) or _other_fuel(book, about)
        elif not _diluted(book, about, differences):
            _moist(book, about)
    _shared(book, abouts, explained=explained)


def _get(book: Book, about: RunBook, name: str) -> Entry | None:
    return book.ledger.get(stem(about, name))


def _say(book: Book, run: str, phrase: str, keys: Iterable[str], **values: str) -> None:
    """A finding in the words of a phrase; the values go with it, so that a firm's own wording can hold them."""
    name = f"hint.{phrase}"
    words = load_phrases()(name, **values)
    book.findings.append(Finding(run, words, tuple(keys), phrase=name, values=tuple(values.items())))


# ---- one run, off the line of its fuel -----------------------------------------------------------------------


def _off_the_line(book: Book, about: RunBook) -> None:
    difference = book.ledger[about.key("combustion.co2_difference")]
    expected = book.ledger[about.key("combustion.co2_expected")]
    dioxide = about.dry["co2"]
    bound, oxygen, scale = (book.ledger[stem(about, n)] for n in ("co2_bound", "o2_needed", "scale_needed"))
    possible = oxygen.value >= 0
    _say(
        book,
        about.run.key,
        "off_the_line" if possible else "off_the_line_co2",
        (difference.key, dioxide.key, expected.key, bound.key, scale.key, *([oxygen.key] if possible else [])),
        measured=f"{dioxide.value:.2f}",
        expected=f"{expected.value:.2f}",
        bound=f"{bound.value:.2f}",
        oxygen=f"{about.dry['o2'].value:.2f}",
        oxygen_needed=f"{oxygen.value:.2f}",
        scale=f"{scale.value:.3f}",
    )


def _wet(book: Book, about: RunBook) -> bool:
    """A wet sample called dry: divided by the dry share, both gases lie on the line and moisture is of this fuel."""
    flags = [_get(book, about, f"wet.{name}_met") for name in ("co2", "moisture")]
    if about.moisture is None or any(flag is None or flag.value != 1.0 for flag in flags):
        return False
    names = ("o2", "co2", "co2_difference", "co2_bound", "moisture_expected")
    oxygen, dioxide, difference, bound, expected = entries = [book.ledger[stem(about, f"wet.{name}")] for name in names]
    _say(
        book,
        about.run.key,
        "wet_called_dry",
        (about.moisture.key, *(entry.key for entry in entries)),
        moisture=f"{100 * about.moisture.value:.1f}",
        factor=f"{1 / (1 - about.moisture.value):.3f}",
        oxygen=f"{oxygen.value:.2f}",
        co2=f"{dioxide.value:.2f}",
        off=f"{abs(difference.value):.2f}",
        bound=f"{bound.value:.2f}",
        expected=f"{100 * expected.value:.1f}",
    )
    return True


def _other_fuel(book: Book, about: RunBook) -> bool:
    """Another fuel: the fuel factor lies in the range of published ones, and moisture, if measured, is theirs."""
    factor = book.ledger.get(about.key("combustion.fuel_factor"))
    met = book.ledger.get(about.key("combustion.fuel_factor.met"))
    if factor is None or (met is not None and met.value == 1.0):
        return False
    others = fuels_holding(factor.value)
    values, keys = {"factor": f"{factor.value:.3f}"}, [factor.key, about.key("combustion.co2_difference")]
    sides = [_get(book, about, name) for name in ("moisture_not_below", "moisture_not_above")]
    if about.moisture is None or None in sides:
        if others:
            _say(book, about.run.key, "other_fuel", keys, **values, fuels=", ".join(others))
        return bool(others)
    if all(side is not None and side.value == 1.0 for side in sides):
        return False
    waters = [(name, entry) for name in others if (entry := _water_of(book, about, name)) is not None]
    expected = book.ledger[about.key("combustion.moisture_expected")]
    if waters:
        values |= {
            "fuels": ", ".join(f"{name} ({100 * entry.value:.1f} %)" for name, entry in waters),
            "moisture": f"{100 * about.moisture.value:.1f}",
            "expected": f"{100 * expected.value:.1f}",
        }
        keys += [about.moisture.key, expected.key, *(entry.key for _, entry in waters)]
        _say(book, about.run.key, "other_fuel_moist", keys, **values)
    return bool(waters)


def _water_of(book: Book, about: RunBook, name: str) -> Entry | None:
    """Moisture that a published fuel would give at the oxygen measured; None where it is not what was measured."""
    air = book.ledger.get(about.key("moisture.ambient"))
    oxygen, measured = about.dry.get("o2"), about.moisture
    if name not in nominal_names() or oxygen is None or measured is None:
        return None
    readings = {"o2": oxygen.value} | ({} if air is None else {"air_moisture": air.value})
    expected = balance(nominal_fuel(name), readings).entry("moisture_expected")
    reach = nominal_reach(name)[1] / 100 * expected.value * (1 - expected.value)
    wide = agreement_table()["moisture"]["tolerance"] + reach
    if abs(measured.value - expected.value) > wide:
        return None
    reason = f"combustion of {name} of nominal composition at the oxygen measured"
    return book.state(stem(about, f"other_moisture.{slug(name)}"), expected.value, "1", reason)


# ---- one run, on the line ------------------------------------------------------------------------------------


def _diluted(book: Book, about: RunBook, differences: Sequence[Entry]) -> bool:
    """Ambient air in the sample: rates by flow below those by heat input, perhaps with moisture above the expected."""
    routes = _by_routes(book, about, differences)
    if routes is None or not about.measured.keys() & {"o2", "co2"}:
        return False
    keys, values = [routes.key], {"routes": f"{routes.value:.0f}"}
    above = _get(book, about, "moisture_not_above")
    share = _by_moisture(book, about)
    if above is not None and above.value != 1.0 and share is not None:
        values["moisture"] = f"{share.value:.0f}"
        _say(book, about.run.key, "diluted_both", (*keys, share.key), **values)
    else:
        _say(book, about.run.key, "diluted_routes", keys, **values)
    return True


def _by_routes(book: Book, about: RunBook, differences: Sequence[Entry]) -> Entry | None:
    """Share of air that explains the routes; None where they agree, or the rate by flow is the higher one."""
    apart = agreement_table()["routes"]["apart"]
    for difference in differences:
        stated = difference.key.rpartition(".")[0]
        if not stated.startswith(about.key("")) or ".mass_rate" not in stated or abs(difference.value) <= apart:
            continue
        flow, heat = (book.ledger.get(f"{stated}.{name}") or book.ledger[stated] for name in _ROUTES)
        name = stem(about, f"air_by_routes.{stated.split('.')[2]}")
        share = book.apply(air_by_routes, name, {"by_flow": flow, "by_heat": heat})
        if share.value > 0:
            return share
    return None


def _by_moisture(book: Book, about: RunBook) -> Entry | None:
    humidity = book.ledger.get(about.key("combustion.air_humidity"))
    expected = book.ledger.get(about.key("combustion.moisture_expected"))
    if humidity is None or expected is None or about.moisture is None:
        return None
    inputs = {"measured": about.moisture, "expected": expected, "humidity": humidity}
    return book.attempt(air_by_moisture, stem(about, "air_by_moisture"), inputs)


def _moist(book: Book, about: RunBook) -> None:
    """Moisture above the water of combustion, with nothing else to tell its causes apart."""
    above = _get(book, about, "moisture_not_above")
    share = _by_moisture(book, about) if above is not None and above.value != 1.0 else None
    if share is None or about.moisture is None:
        return
    expected = book.ledger[about.key("combustion.moisture_expected")]
    _say(
        book,
        about.run.key,
        "moist",
        (about.moisture.key, expected.key, share.key),
        measured=f"{100 * about.moisture.value:.1f}",
        expected=f"{100 * expected.value:.1f}",
        share=f"{share.value:.0f}",
    )


# ---- all runs ------------------------------------------------------------------------------------------------


def _shared(book: Book, abouts: Sequence[RunBook], *, explained: bool) -> None:
    """A value all runs share: all lie on one side of the line, and a direct calibration or nothing else says why."""
    judged = [about for about in abouts if _get(book, about, "co2_met") is not None]
    if not judged or any(book.ledger[stem(about, "co2_met")].value == 1.0 for about in judged):
        return
    sides = {book.ledger[about.key("combustion.co2_difference")].value > 0 for about in judged}
    errors = [check for check in book.checks if not check.met and check.bound in _ERRORS]
    if len(sides) > 1 or (not errors and (explained or len(judged) < 2)):
        return
    scales = [book.ledger[stem(about, "scale_needed")] for about in judged]
    ends = dict.fromkeys(f"{end(entry.value for entry in scales):.3f}" for end in (min, max))
    values = {"scales": " to ".join(ends)}
    keys = [entry.key for entry in scales]
    if errors:
        said = "; ".join(dict.fromkeys(f"{check.gas}, {check.title}" for check in errors))
        shared = [key for check in errors for key in (check.value, check.bound)]
        _say(book, "", "shared_with_error", [*keys, *shared], errors=said, **values)
    else:
        _say(book, "", "shared", keys, **values)
