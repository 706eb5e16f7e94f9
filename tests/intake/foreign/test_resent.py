"""A file sent again: each cell that changed is said with its place; nothing else is."""

from __future__ import annotations

import io
from pathlib import Path

from reporter.cli import UNREADABLE, WITHHELD, main
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.resent import difference
from tests.corpus.case import HEADERS, book, plain, rows_on, text
from tests.corpus.truth import TRUTH


def test_one_changed_cell() -> None:
    made = difference(grid_of("a.csv", plain()), grid_of("a.csv", plain(put={(9, 1): "99.99"})))
    assert made.cells == (("B11", f"{TRUTH[9][1]:.2f}", "99.99"),)
    assert (made.added, made.gone, made.alike) == ((), (), len(TRUTH))


def test_the_same_file() -> None:
    assert difference(grid_of("a.csv", plain()), grid_of("b.csv", plain())).lines() == ("the same file, byte for byte",)


def test_the_same_rows_in_another_order_or_encoding_are_alike() -> None:
    other = plain("utf-16", order=range(59, -1, -1), delimiter=";")
    made = difference(grid_of("a.csv", plain()), grid_of("b.csv", other))
    assert made.cells == made.added == made.gone == ()
    assert made.alike == len(TRUTH) + 1


def test_rows_new_and_gone() -> None:
    made = difference(grid_of("a.csv", plain(order=range(10))), grid_of("a.csv", plain(order=range(3, 12))))
    assert [line.partition(":")[0] for line in made.gone] == ["line 2", "line 3", "line 4"]
    assert [line.partition(":")[0] for line in made.added] == ["line 9", "line 10"]
    assert not made.cells


def test_a_changed_time_is_a_changed_cell() -> None:
    made = difference(grid_of("a.csv", plain()), grid_of("a.csv", plain(put={(5, 0): "2026-04-20 23:00:00"})))
    assert made.cells == (("A7", "2026-04-20 09:55:00", "2026-04-20 23:00:00"),)


def test_cells_of_a_workbook_are_named_by_their_sheet() -> None:
    def other(made: object) -> None:
        rows_on(made.active)  # type: ignore[attr-defined]
        made.active["C5"] = 7.0  # type: ignore[attr-defined]

    one = grid_of("a.xlsx", book(lambda made: rows_on(made.active)))
    assert difference(one, grid_of("a.xlsx", book(other))).cells == (("Sheet!C5", f"{TRUTH[3][2]}", "7"),)


def test_many_changes_are_counted() -> None:
    made = difference(grid_of("a.csv", plain()), grid_of("a.csv", plain(show=lambda v: f"{v + 1:.2f}")))
    assert made.lines()[-1] == "and 220 more"
    assert len(made.cells) == 4 * len(TRUTH)


def test_map_says_it(tmp_path: Path) -> None:
    old, new = tmp_path / "old.csv", tmp_path / "new.csv"
    old.write_text(text(), encoding="utf-8")
    new.write_text(text(put={(9, 1): "99.99"}, headers=(HEADERS,)), encoding="utf-8")
    out, err = io.StringIO(), io.StringIO()
    assert main(["map", str(new), "--against", str(old)], out, err) == WITHHELD
    assert "Against old.csv" in out.getvalue()
    assert "B11: '23.52' before, '99.99' now" in out.getvalue()
    assert main(["map", str(new), "--against", str(tmp_path / "none.csv")], out, err) == UNREADABLE
    assert "none.csv cannot be read" in err.getvalue()
