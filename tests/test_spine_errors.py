"""Errors and problems: drawn once, complete, and able to cross from a worker process."""

from __future__ import annotations

import pickle
import re

import pytest

from reporter import errors
from reporter.errors import FluebookError, UnreadableError
from reporter.problems import Grade, Place, Problem, catalogue, problem

CLASSES = {
    name: value for name, value in vars(errors).items() if isinstance(value, type) and issubclass(value, FluebookError)
}


def test_the_tree_at_the_top_draws_every_class() -> None:
    drawn = re.findall(r"[A-Z]\w+Error", (errors.__doc__ or "").split("Faults of")[0])
    assert sorted(drawn) == sorted(CLASSES)
    assert {kind.__base__ for name, kind in CLASSES.items() if name != "FluebookError"} == {FluebookError}


@pytest.mark.parametrize("name", CLASSES)
def test_errors_survive_pickling(name: str) -> None:
    error = CLASSES[name]("what happened", place="field.xlsx, Runs!C5")
    again = pickle.loads(pickle.dumps(error))
    assert type(again) is type(error)
    assert (again.message, again.place, str(again)) == (error.message, error.place, str(error))
    assert str(error) == "what happened (field.xlsx, Runs!C5)"
    assert str(CLASSES[name]("alone")) == "alone"


def test_an_unreadable_input_carries_its_problems_across_processes() -> None:
    code = next(iter(catalogue()))
    found = problem(code, Place("field.xlsx", "Runs", "C5", "End"), "10:61", concerns=("run.1",))
    error = UnreadableError("field.xlsx cannot be read", [found], "field.xlsx")
    again = pickle.loads(pickle.dumps(error))
    assert again.problems == (found,)
    assert again.place == "field.xlsx"


@pytest.mark.parametrize("code", catalogue())
def test_every_code_of_the_catalogue_is_whole(code: str) -> None:
    row = catalogue()[code]
    assert re.fullmatch(r"[a-z0-9]+(-[a-z0-9]+)*", code)
    assert isinstance(row.grade, Grade)
    for text in (row.title, row.expected, row.remedy):
        assert text.strip() == text
        assert text
        assert not text.endswith(".")


def test_a_problem_says_where_what_and_what_to_do() -> None:
    code = next(iter(catalogue()))
    place = Place("field.xlsx", "Runs", "C5", "End")
    found = problem(code, place, "10:61", expected="a time", remedy="write the time as 10:01")
    assert found.grade is catalogue()[code].grade
    assert place.text() == "field.xlsx, Runs!C5 (End)"
    head = f"field.xlsx, Runs!C5 (End): {found.title}. Found: 10:61. Expected: a time."
    assert found.text() == f"{head} To do: write the time as 10:01. [{code}]"
    assert found.as_dict()["cell"] == "C5"
    assert pickle.loads(pickle.dumps(found)) == found
    assert isinstance(problem(code), Problem)


@pytest.mark.parametrize(
    ("place", "text"),
    [
        (Place(), ""),
        (Place(file="a.xlsx"), "a.xlsx"),
        (Place(sheet="Runs"), "Runs"),
        (Place(sheet="Runs", cell="C5"), "Runs!C5"),
        (Place(file="a.xlsx", field="Test date"), "a.xlsx (Test date)"),
    ],
)
def test_places_in_one_line(place: Place, text: str) -> None:
    assert place.text() == text


def test_an_unknown_code_is_a_mistake_of_the_program() -> None:
    with pytest.raises(KeyError):
        problem("no-such-code")
