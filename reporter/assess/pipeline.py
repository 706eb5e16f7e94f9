"""The stream from record to outcome, in the order in which a reviewer would recompute it."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.assess.averages import Average, average
from reporter.assess.barometer import look_at_barometer
from reporter.assess.clock import look_at_clocks
from reporter.assess.comparison import Made, compare, not_measured
from reporter.assess.findings import look_at_record
from reporter.assess.gaps import say_gaps
from reporter.assess.groups import groups, runs_of, suffix_of
from reporter.assess.hints import give_hints
from reporter.assess.states import run_results
from reporter.ledger import Ledger
from reporter.methods.averages import mean_of_valid
from reporter.outcome import Comparison, Outcome
from reporter.record import Record, Run
from reporter.reduction.ambient import ambient_air
from reporter.reduction.bases import RunBook, calculate_moisture, put_on_bases
from reporter.reduction.book import Book, Lane, lanes, runs_in_order
from reporter.reduction.calibration import calibrations
from reporter.reduction.combust import balance
from reporter.reduction.converter import check_converter
from reporter.reduction.correction import correct
from reporter.reduction.diluents import reduce_diluents
from reporter.reduction.flow import dry_standard_flow
from reporter.reduction.fuels import run_factors, shares
from reporter.reduction.heat import heat_input, heat_inputs
from reporter.reduction.levels import check_levels
from reporter.reduction.moisture import moisture
from reporter.reduction.plane import sampling_plane
from reporter.reduction.plans import Plan, plans
from reporter.reduction.process import reduce_load
from reporter.reduction.process_log import reduce_process_log
from reporter.reduction.readings import reduce_readings
from reporter.reduction.results import Means, Missing, result
from reporter.reduction.uncertainty import reading_uncertainty
from reporter.reduction.window import window
from reporter.synthetic import as_draft, is_synthetic

#: Quantities averaged over the valid runs for the table of runs, whatever the limits ask.
_SHOWN = ("mean", "corrected", "dry", "wet", "mass_concentration", "emission_rate", "mass_rate")


def assess(record: Record) -> Outcome:
    """Reduce, check, balance, average and compare one test.

    Parameters
    ----------
    record
        The test as entered.

    Returns
    -------
    Outcome
        The filled ledger and everything found; problems never stop it.
    """
    record = as_draft(record)
    book = Book(record, Ledger(record.system))
    _say_synthetic(book)
    sampling_plane(book)
    tracks = lanes(record)
    runs = runs_in_order(record)
    look_at_barometer(book, runs)
    windows = {run.key: window(book, run) for run in runs}
    series = {(lane.segment, run.key): reduce_readings(book, lane, windows[run.key]) for lane in tracks for run in runs}
    abouts = [RunBook(run) for run in runs]
    _correct(book, tracks, runs, abouts)
    wanted = plans(book, tracks)
    missing: dict[str, list[Missing]] = {}
    for about in abouts:
        _reduce_run(book, about, wanted, missing)
    look_at_record(book, tracks, abouts, windows, series)
    look_at_clocks(book, tracks, runs, windows)
    say_gaps(book, wanted, missing)
    comparisons = _compare(book, abouts, wanted, missing)
    averages = _averages(book, abouts, wanted)
    give_hints(book, abouts)
    return Outcome(
        record=record,
        ledger=book.ledger,
        runs=run_results(book, tracks, abouts, windows, series),
        checks=tuple(book.checks),
        comparisons=comparisons,
        problems=tuple(book.problems),
        findings=tuple(book.findings),
        calibration_points=tuple(book.points),
        averages=averages,
        stated=tuple(sentence for sentence in book.stated if sentence),
    )


def _say_synthetic(book: Book) -> None:
    said = book.record.test.synthetic
    if said is not None and is_synthetic(book.record):
        book.trouble("synthetic-test", said.place, said.value)


def _correct(book: Book, tracks: Sequence[Lane], runs: Sequence[Run], abouts: Sequence[RunBook]) -> None:
    """Moisture of each run, then every channel's calibrations, corrected means and bases."""
    for about in abouts:
        about.moisture = moisture(book, about.run)
        ambient_air(book, about.run)
    for lane in tracks:
        found = calibrations(book, lane)
        check_converter(book, lane)
        check_levels(book, found, runs)
        for about, corrected in zip(abouts, correct(book, found, runs), strict=True):
            put_on_bases(book, about, corrected)


def _reduce_run(book: Book, about: RunBook, wanted: Sequence[Plan], missing: dict[str, list[Missing]]) -> None:
    """Everything of one run from its corrected means: diluents, heat input, flow, balance, results."""
    parts = heat_inputs(book, about)
    heat = heat_input(book, about, parts)
    share = shares(book, about, parts)
    factors = run_factors(book, about, share)
    for diluent in ("o2", "co2"):
        reading_uncertainty(book, about, diluent)
    balance(book, about, share)
    calculate_moisture(book, about)
    means = Means(share, heat, dry_standard_flow(book, about))
    reduce_load(book, about)
    reduce_process_log(book, about)
    reduce_diluents(book, about, tuple(share), factors)
    for plan in wanted:
        made = result(book, about, means, plan)
        if isinstance(made, Missing):
            name = f"{plan.lane.segment}.{plan.ending}" if plan.limit is None else plan.limit.key
            missing.setdefault(name, []).append(made)


def _compare(
    book: Book, abouts: Sequence[RunBook], wanted: Sequence[Plan], missing: dict[str, list[Missing]]
) -> tuple[Comparison, ...]:
    """Every limit in the order entered, with the runs of its group."""
    made: dict[str, Comparison] = {}
    lengths: dict[str, float | None] = {}
    for plan in wanted:
        limit = plan.limit
        if limit is None:
            continue
        chosen = runs_of(limit, abouts)
        name, group = f"{plan.lane.segment}.{plan.ending}", suffix_of(abouts, chosen)
        length = None if limit.minimum_run_length is None else limit.minimum_run_length.value
        own = lengths.setdefault(f"{name}{group}", length) != length
        mean = average(book, chosen, name, limit, suffix=group + (f".limit_{limit.key}" if own else ""))
        _cross_average(book, name, mean)
        runs = {about.run.key for about in chosen}
        gaps = tuple(dict.fromkeys(gap for gap in missing.get(limit.key, ()) if gap.run in runs))
        refusal = "" if chosen else "the runs are of several groups and 'Applies when' names none, or more than one"
        made[limit.key] = compare(book, chosen, Made(plan, mean, gaps, refusal))
    return tuple(made.get(limit.key) or not_measured(limit) for limit in book.record.limits)


def _cross_average(book: Book, name: str, mean: Average) -> None:
    """Average of the second route, where every run that counts has it."""
    if mean.entry is None:
        return
    for route in ("by_flow", "by_heat_input"):
        pairs = [(book.ledger.get(about.key(f"{name}.{route}")), flag) for about, _, flag in mean.runs]
        entries = [entry for entry, _ in pairs if entry is not None]
        if entries and len(entries) == len(pairs):
            inputs = {"values": entries, "flags": [flag for _, flag in pairs]}
            book.apply(mean_of_valid, f"{mean.entry.key}.cross_check", inputs)


def _averages(book: Book, abouts: Sequence[RunBook], wanted: Sequence[Plan]) -> tuple[str, ...]:
    """Averages of the table of runs."""
    names: dict[str, None] = {}
    for about in abouts:
        for segment in about.measured:
            names.update(dict.fromkeys(f"{segment}.{quantity}" for quantity in _SHOWN))
        names.update(dict.fromkeys(_run_quantities(book, about)))
    for plan in wanted:
        names[f"{plan.lane.segment}.{plan.ending}"] = None
    keys: list[str] = []
    for name in names:
        for members in groups(abouts).values():
            made = average(book, members, name, suffix=suffix_of(abouts, members))
            if made.entry is not None:
                keys.append(made.entry.key)
    return tuple(keys)


def _run_quantities(book: Book, about: RunBook) -> list[str]:
    wanted = (
        "moisture", "heat_input", "flow.dry_standard", "load", "output", "combustion.excess_air",
        "combustion.excess_air.by_analysis", "combustion.fuel_factor", "combustion.molecular_weight_dry",
        "combustion.molecular_weight_wet",
        "combustion.equivalence_ratio", "combustion.air_fuel_mole", "combustion.air_fuel_mass",
        "combustion.co2_expected", "combustion.moisture_expected",
    )  # fmt: skip
    return [name for name in wanted if about.key(name) in book.ledger]
