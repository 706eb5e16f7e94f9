"""The charts: geometry read back from the SVG, inert text, gaps, spikes, and a clean rendering.

Ticks at 1, 2 and 5 times a power of ten are common practice; everything else here is geometry.
"""

from __future__ import annotations

import dataclasses
import logging
import re
from datetime import datetime, timedelta
from itertools import pairwise
from xml.etree import ElementTree

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reporter.output import svg
from reporter.output.charts import (
    Bar,
    CalibrationMark,
    ChartWords,
    ComparisonBars,
    DiagramPoint,
    ExcludedPeriod,
    FactorBand,
    FuelLine,
    LimitLine,
    MarkKind,
    OxygenDiagram,
    RunWindow,
    Style,
    Trace,
    comparison_bars,
    comparison_strip,
    oxygen_diagram,
    trace_chart,
)
from reporter.output.placing import Box, place_label
from reporter.output.scale import Axis, TimeAxis, padded, thinned, ticks, time_ticks, unbroken

START = datetime(2024, 5, 6, 8, 0)
MINUTE = timedelta(minutes=1)
NAMESPACE = "{http://www.w3.org/2000/svg}"
STYLE = Style(accent="#aa0001", ink="#000002", grey="#bbbbb3", band="#eeeee4", muted="#777775")


def tree(text: str) -> ElementTree.Element:
    return ElementTree.fromstring(text)


def drawn(root: ElementTree.Element, tag: str, **attributes: str) -> list[ElementTree.Element]:
    wanted = {name.replace("_", "-"): value for name, value in attributes.items()}
    return [e for e in root.iter(NAMESPACE + tag) if all(e.get(k) == v for k, v in wanted.items())]


def points(path: ElementTree.Element) -> list[tuple[str, float, float]]:
    found = re.findall(r"([ML])(-?[\d.]+) (-?[\d.]+)", path.get("d", ""))
    return [(letter, float(x), float(y)) for letter, x, y in found]


def texts(root: ElementTree.Element) -> list[str]:
    return ["".join(e.itertext()) for e in root.iter(NAMESPACE + "text")]


def minutes(values: dict[int, float]) -> tuple[tuple[datetime, float], ...]:
    return tuple((START + minute * MINUTE, value) for minute, value in values.items())


def full_trace(name: str = "NOx") -> Trace:
    readings = minutes({m: 20.0 + m % 7 for m in range(100) if not 60 <= m < 65} | {90: 500.0})
    used = tuple(r for r in readings if START + 20 * MINUTE <= r[0] < START + 80 * MINUTE)
    runs = (
        RunWindow("Run 1", START + 20 * MINUTE, START + 80 * MINUTE, used, 23.0, "23.00"),
        RunWindow("Run 2", START + 82 * MINUTE, START + 99 * MINUTE, note="invalid"),
    )
    marks = (
        CalibrationMark(START + 5 * MINUTE, 0.2, MarkKind.ZERO),
        CalibrationMark(START + 8 * MINUTE, 45.0, MarkKind.UPSCALE),
        CalibrationMark(START + 10 * MINUTE, 90.0, MarkKind.UPSCALE, system=False),
        CalibrationMark(START + 12 * MINUTE, 40.0, MarkKind.CONVERTER),
    )
    excluded = (ExcludedPeriod(START + 30 * MINUTE, START + 36 * MINUTE, "1"),)
    return Trace(name, "ppm, dry", readings, MINUTE, runs, excluded, marks, LimitLine(60.0, "limit 60 ppm"))


def full_diagram() -> OxygenDiagram:
    runs = (
        DiagramPoint("Run 1", 4.93, 9.02, 0.12, 0.14, 9.06),
        DiagramPoint("Run 2", 5.01, 9.05, 0.12, 0.14, 9.01),
    )
    band = FactorBand("Fo 1.600 to 1.836", 1.6, 1.836, 20.9)
    return OxygenDiagram(FuelLine("natural gas", 11.85, 20.95), runs, band, "expanded uncertainty")


def bars(limit: float | None = 30.0) -> ComparisonBars:
    runs = (Bar("Run 1", 24.0, "24.0"), Bar("Run 2", 26.0, "26.0"), Bar("Run 3", 40.0, "40.0", counts=False))
    return ComparisonBars(runs, Bar("Average", 25.0, "25.0"), limit, "at most 30", "ppm")


def every_chart(style: Style | None = None) -> list[str]:
    return [
        trace_chart([full_trace(), full_trace("CO")], style, title="two gases"),
        oxygen_diagram(full_diagram(), style, title="diagram"),
        comparison_bars(bars(), style, title="bars"),
        comparison_strip(bars(), style, title="strip"),
    ]


# ---- axes ---------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("low", "high", "about", "expected"),
    [
        (0.0, 100.0, 5, ["0", "20", "40", "60", "80", "100"]),
        (-0.3, 0.2, 5, ["−0.3", "−0.2", "−0.1", "0", "0.1", "0.2"]),
        (4.81, 5.33, 5, ["5.0", "5.2"]),
        (9_000.0, 21_000.0, 3, ["10\u202f000", "15\u202f000", "20\u202f000"]),
        (0.0, 0.045, 5, ["0", "0.01", "0.02", "0.03", "0.04"]),
    ],
)
def test_ticks_are_round(low: float, high: float, about: int, expected: list[str]) -> None:
    marks = ticks(low, high, about)
    assert [marks.text(value) for value in marks.values] == expected


@given(st.floats(-1e6, 1e6), st.floats(1e-6, 1e6), st.integers(2, 9))
def test_ticks_lie_inside_and_print_as_they_are(low: float, span: float, about: int) -> None:
    marks = ticks(low, low + span, about)
    assert len(marks.values) <= about + 1
    for value in marks.values:
        assert low - 1e-6 * span <= value <= low + span * (1 + 1e-6)
        printed = float(marks.text(value).replace("−", "-").replace("\u202f", ""))
        assert printed == pytest.approx(value, abs=1e-9 * max(1.0, abs(value)))


@given(st.floats(-1e5, 1e5), st.floats(0, 1e5))
def test_ends_hold_the_values_and_are_apart(low: float, span: float) -> None:
    start, end = padded(low, low + span)
    assert start < end
    assert start <= low
    assert low + span <= end


@pytest.mark.parametrize(
    ("length", "step"),
    [(timedelta(minutes=65), 10), (timedelta(hours=4), 30), (timedelta(hours=9), 120), (timedelta(days=3), 720)],
)
def test_times_stand_on_round_minutes(length: timedelta, step: int) -> None:
    low = datetime(2024, 5, 6, 7, 53, 20)
    times = time_ticks(low, low + length)
    assert all(low <= time <= low + length for time in times)
    assert {b - a for a, b in pairwise(times)} == {timedelta(minutes=step)}
    assert all((time.hour * 60 + time.minute) % step == 0 and time.second == 0 for time in times)


def test_axes_are_straight() -> None:
    axis = Axis(10.0, 20.0, 100.0, 0.0)
    assert [axis.at(v) for v in (10.0, 15.0, 20.0, 25.0)] == [100.0, 50.0, 0.0, -50.0]
    times = TimeAxis(START, START + 10 * MINUTE, 0.0, 50.0)
    assert times.at(START + 4 * MINUTE) == pytest.approx(20.0)


# ---- thinning and gaps --------------------------------------------------------------------------------


@given(st.lists(st.floats(-1e3, 1e3), min_size=1, max_size=400), st.floats(0.01, 50.0))
def test_thinning_keeps_ends_and_extremes_in_order(values: list[float], width: float) -> None:
    series = [(float(i), value) for i, value in enumerate(values)]
    kept = thinned(series, width)
    assert kept[0] == series[0]
    assert kept[-1] == series[-1]
    assert min(y for _, y in kept) == min(values)
    assert max(y for _, y in kept) == max(values)
    assert kept == sorted(set(kept))
    assert set(kept) <= set(series)


def test_a_gap_is_cut() -> None:
    pieces = unbroken(minutes({0: 1.0, 1: 2.0, 4: 3.0, 5: 4.0, 6: 5.0}), MINUTE * 1.5)
    assert [[value for _, value in piece] for piece in pieces] == [[1.0, 2.0], [3.0, 4.0, 5.0]]


def test_the_lines_do_not_bridge_gaps() -> None:
    trace = full_trace()
    root = tree(trace_chart([trace], STYLE, title="x"))
    [used] = drawn(root, "path", stroke=STYLE.accent, fill="none")
    strokes = [letter for letter, _, _ in points(used)]
    assert strokes.count("M") == 2
    assert len(strokes) == len(trace.runs[0].used)


def test_a_single_reading_is_seen() -> None:
    trace = Trace("O2", "%", minutes({0: 5.0}), MINUTE)
    root = tree(trace_chart([trace], STYLE, title="x"))
    [line] = drawn(root, "path", stroke=STYLE.grey, fill="none")
    (_, left, _), (_, right, _) = points(line)
    assert right > left


def test_a_long_series_stays_small_and_keeps_its_spike() -> None:
    second = timedelta(seconds=1)
    values = [10.0 + (i * 7919 % 13) / 13 for i in range(14_400)]
    values[7_777] = 99.0
    readings = tuple((START + i * second, value) for i, value in enumerate(values))
    run = RunWindow("Run 1", readings[0][0], readings[-1][0], readings, 10.5, "10.5")
    text = trace_chart([Trace("CO", "ppm", readings, second, (run,))], STYLE, title="x")
    [line] = drawn(tree(text), "path", stroke=STYLE.accent, fill="none")
    ys = [y for _, _, y in points(line)]
    lowest_value, span = min(values), 99.0 - min(values)
    assert len(text) < 120_000
    plot_bottom_to_spike = (max(ys) - min(ys)) / span
    means = drawn(tree(text), "path", stroke=STYLE.ink, stroke_dasharray="2 1.4")
    mean_y = points(means[0])[0][2]
    assert (max(ys) - mean_y) / plot_bottom_to_spike == pytest.approx(10.5 - lowest_value, rel=0.02)


# ---- trace chart --------------------------------------------------------------------------------------


def test_values_lie_where_the_axis_says() -> None:
    trace = full_trace()
    root = tree(trace_chart([trace], STYLE, title="x"))
    tick_ys = {e.text: float(e.get("y", "0")) for e in drawn(root, "text", fill=STYLE.muted, text_anchor="end")}
    per_unit = (tick_ys["0"] - tick_ys["60"]) / 60
    zero = tick_ys["0"] - STYLE.size * 0.34
    [used] = drawn(root, "path", stroke=STYLE.accent, fill="none")
    for (_, _, y), (_, value) in zip(points(used), trace.runs[0].used, strict=True):
        assert (zero - y) / per_unit == pytest.approx(value, abs=0.02)
    [zero_gas] = drawn(root, "circle", fill=STYLE.ink)[:1]
    assert (zero - float(zero_gas.get("cy", "0"))) / per_unit == pytest.approx(0.2, abs=0.02)


def test_panels_share_one_time_axis() -> None:
    early = Trace("NOx", "ppm", minutes(dict.fromkeys(range(10), 1.0)), MINUTE)
    late = Trace("CO", "ppm", minutes(dict.fromkeys(range(50, 60), 1.0)), MINUTE)
    root = tree(trace_chart([early, late], STYLE, title="x"))
    first, second = drawn(root, "path", stroke=STYLE.grey, fill="none")
    assert points(first)[0][1] == 30.0
    assert points(second)[0][1] - points(first)[-1][1] == pytest.approx(41 / 59 * 460, abs=0.05)
    assert [t for t in texts(root) if re.fullmatch(r"\d\d:\d\d", t)] == [f"08:{m}0" for m in range(6)]


def test_another_day_is_named() -> None:
    night = tuple((datetime(2024, 5, 6, 22) + m * MINUTE, 1.0) for m in range(300))
    shown = texts(tree(trace_chart([Trace("CO", "ppm", night, MINUTE)], title="x")))
    assert [t for t in shown if t.startswith("2024")] == ["2024-05-06", "2024-05-07"]


def test_readings_beyond_the_scale_are_counted_and_clipped() -> None:
    root = tree(trace_chart([full_trace()], STYLE, title="x"))
    assert "limit 60 ppm; 1 other reading beyond the scale" in texts(root)
    [line] = [e for w in root.iter(NAMESPACE + "svg") for e in w.findall(NAMESPACE + "path")][:1]
    [frame] = [e for e in root.iter(NAMESPACE + "svg") if e is not root]
    assert line in list(frame)
    assert min(y for _, _, y in points(line)) < float(frame.get("y", "0"))


def test_a_direct_gas_beyond_the_scale_stands_on_the_edge() -> None:
    root = tree(trace_chart([full_trace()], STYLE, title="x"))
    [frame] = [e for e in root.iter(NAMESPACE + "svg") if e is not root]
    hollow = drawn(root, "path", fill=STYLE.paper, stroke=STYLE.ink)
    ys = [y for _, _, y in points(hollow[0])]
    top = float(frame.get("y", "0"))
    assert top <= min(ys)
    assert max(ys) < top + 12


def test_a_run_that_does_not_count_is_an_empty_frame() -> None:
    root = tree(trace_chart([full_trace()], STYLE, title="x"))
    assert len(drawn(root, "rect", fill=STYLE.band)) == 1
    assert len(drawn(root, "rect", fill=STYLE.paper, stroke_dasharray="2 1.5")) == 2  # one is in the key
    assert "Run 1: mean 23.00" in texts(root)


def test_the_key_shows_only_what_occurs() -> None:
    plain = Trace("NOx", "ppm", minutes({0: 1.0, 1: 2.0}), MINUTE)
    assert {"other readings"} == set(texts(tree(trace_chart([plain], title="x")))) & set(
        dataclasses.asdict(ChartWords()).values()
    )


# ---- oxygen diagram -----------------------------------------------------------------------------------


def test_a_point_on_the_fuel_line_is_drawn_on_it() -> None:
    line = FuelLine("methane", 11.7, 20.95)
    oxygen = 6.0
    dioxide = 11.7 * (20.95 - oxygen) / 20.95
    diagram = OxygenDiagram(line, (DiagramPoint("Run 1", oxygen, dioxide, expected=dioxide),))
    root = tree(oxygen_diagram(diagram, STYLE, title="x"))
    drawn_lines = drawn(root, "path", stroke=STYLE.accent, stroke_width="1.1")[:2]
    measured = [e for e in root.iter(NAMESPACE + "circle") if e.get("fill") in (None, STYLE.ink)][:2]
    for path, circle in zip(drawn_lines, measured, strict=True):
        (_, x1, y1), (_, x2, y2) = points(path)
        x, y = float(circle.get("cx", "0")), float(circle.get("cy", "0"))
        assert y == pytest.approx(y1 + (x - x1) / (x2 - x1) * (y2 - y1), abs=0.05)


def test_the_band_ends_where_the_fuel_factor_has_its_ends() -> None:
    # Eq. 3B-2: Fo = (20.9 - O2)/CO2, so at no oxygen CO2 is 20.9/Fo.
    band = FactorBand("range", 1.6, 1.9, 20.9)
    root = tree(oxygen_diagram(OxygenDiagram(FuelLine("x", 10.0, 20.9), (), band), STYLE, title="x"))
    (_, _, low), (_, _, apex), (_, _, high) = points(drawn(root, "path", fill=STYLE.band)[0])
    (_, _, ten), (_, _, none) = points(drawn(root, "path", stroke=STYLE.accent)[0])
    per_percent = (none - ten) / 10.0
    assert apex == none
    assert (none - low) / per_percent == pytest.approx(20.9 / 1.6, abs=0.01)
    assert (none - high) / per_percent == pytest.approx(20.9 / 1.9, abs=0.01)


def test_bars_are_as_long_as_stated() -> None:
    diagram = full_diagram()
    root = tree(oxygen_diagram(diagram, STYLE, title="x"))
    crosses = drawn(root, "path", stroke=STYLE.ink, stroke_width="0.7")
    (_, left, _), (_, right, _), (_, _, top), (_, _, bottom) = points(crosses[0])
    names = {e.text: e for e in root.iter(NAMESPACE + "text")}
    across = float(names["5.2"].get("x", "0")) - float(names["5.0"].get("x", "0"))
    up = float(names["9.0"].get("y", "0")) - float(names["9.2"].get("y", "0"))
    assert (right - left) / across * 0.2 == pytest.approx(0.24, abs=0.001)
    assert (bottom - top) / up * 0.2 == pytest.approx(0.28, abs=0.001)


def test_names_of_close_points_do_not_cover_each_other() -> None:
    frame = Box(0, 0, 200, 150)
    others = [(100.0, 75.0), (101.0, 77.0), (99.0, 74.0), (103.0, 75.0)]
    taken = [Box(x - 4, y - 4, x + 4, y + 4) for x, y in others]
    placed: list[Box] = []
    for point in others:
        put = place_label(point, (24.0, 6.0), taken=[*taken, *placed], others=others, frame=frame)
        assert all(put.box.shared(box) == 0 for box in (*taken, *placed))
        assert put.box.shared(frame) == pytest.approx(24.0 * 6.0)
        placed.append(put.box)


# ---- comparison ---------------------------------------------------------------------------------------


def test_bars_start_at_zero_and_end_at_their_value() -> None:
    root = tree(comparison_bars(bars(), STYLE, title="x"))
    grey, accent = drawn(root, "rect", fill=STYLE.grey), drawn(root, "rect", fill=STYLE.accent)
    [left_out] = drawn(root, "rect", fill=STYLE.paper)
    lengths = [float(e.get("width", "0")) for e in (*grey, *accent, left_out)]
    assert len({e.get("x") for e in (*grey, *accent, left_out)}) == 1
    assert [w / lengths[0] * 24.0 for w in lengths] == pytest.approx([24.0, 26.0, 25.0, 40.0], abs=0.01)
    [limit] = drawn(root, "path", stroke=STYLE.ink, stroke_width="1.4")
    start = float(grey[0].get("x", "0"))
    assert (points(limit)[0][1] - start) / lengths[0] * 24.0 == pytest.approx(30.0, abs=0.01)


def test_a_negative_value_lies_left_of_zero() -> None:
    shown = ComparisonBars((Bar("Run 1", -0.3, "−0.3"), Bar("Run 2", 0.2, "0.2")), None, None, "", "ppm")
    below, above = drawn(tree(comparison_bars(shown, STYLE, title="x")), "rect", fill=STYLE.grey)
    end_of_below = float(below.get("x", "0")) + float(below.get("width", "0"))
    assert end_of_below == pytest.approx(float(above.get("x", "0")), abs=0.011)


def test_without_a_limit_no_limit_is_drawn() -> None:
    with_limit, without = comparison_strip(bars(), title="x"), comparison_strip(bars(None), title="x")
    assert 'stroke-width="1.6"' in with_limit
    assert 'stroke-width="1.6"' not in without


# ---- all ----------------------------------------------------------------------------------------------


def test_equal_inputs_give_equal_text() -> None:
    assert every_chart() == every_chart()


def test_the_title_comes_first_and_is_only_text() -> None:
    for text in (oxygen_diagram(full_diagram(), title="<b>O2 & CO2</b>"), comparison_strip(bars(), title="<b>")):
        first = tree(text)[0]
        assert first.tag == NAMESPACE + "title"
        assert first.text.startswith("<b>")
        assert not list(first)


def test_text_of_others_is_never_markup() -> None:
    bad = '"><script>x</script>&amp;\x07'
    shown = bad.replace("\x07", "")
    trace = Trace(bad, bad, minutes({0: 1.0, 1: 2.0}), MINUTE, (RunWindow(bad, START, START + MINUTE),))
    runs = ComparisonBars((Bar(bad, 1.0, bad),), None, 2.0, bad, bad)
    diagram = OxygenDiagram(FuelLine(bad, 12.0, 20.9), (DiagramPoint(bad, 5.0, 9.0),), None, bad)
    for text in (
        trace_chart([trace], title=bad),
        comparison_bars(runs, title=bad),
        oxygen_diagram(diagram, title=bad),
    ):
        root = tree(text)
        assert not drawn(root, "script")
        assert shown in texts(root)


def test_every_word_can_be_replaced() -> None:
    names = [field.name for field in dataclasses.fields(ChartWords)]
    own = ChartWords(**{name: f"[{name}]" for name in names})
    several = dataclasses.replace(full_trace(), readings=full_trace().readings + minutes({100: 700.0}))
    plain = dataclasses.replace(full_diagram(), bars="")
    style = Style(words=own)
    shown = " ".join(
        [*every_chart(style), trace_chart([several], style, title="x"), oxygen_diagram(plain, style, title="x")]
    )
    assert [name for name in names if f"[{name}]" not in shown] == []


def test_hatching_stays_inside() -> None:
    for box in ((0.0, 0.0, 30.0, 10.0), (13.7, 8.1, 1.5, 80.0), (400.0, 3.0, 60.0, 90.0)):
        x, y, width, height = box
        ends = [(float(a), float(b)) for a, b in re.findall(r"(-?[\d.]+) (-?[\d.]+)", svg.hatch_data(*box))]
        assert ends
        assert all(x - 0.01 <= a <= x + width + 0.01 and y - 0.01 <= b <= y + height + 0.01 for a, b in ends)


def test_the_renderer_has_nothing_to_say(caplog: pytest.LogCaptureFixture) -> None:
    from weasyprint import HTML

    with caplog.at_level(logging.DEBUG, logger="weasyprint"):
        page = f"<html lang=en><title>x</title><body>{''.join(every_chart())}"
        pdf = HTML(string=page).write_pdf(pdf_tags=True, uncompressed_pdf=True)
    assert [r.message for r in caplog.records if r.levelno >= logging.WARNING and r.name == "weasyprint"] == []
    for title in (b"two gases", b"diagram", b"bars", b"strip"):
        assert b"/Alt (" + title + b")" in pdf
