"""Errors: what they say, their exit codes, and how given values are repeated."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

import develop.errors
from develop.errors import DevelopError, InputError, Problem, Refusal, WriteError
from develop.wording import listed, near_miss, nearest, shown


def test_a_problem_names_place_field_given_and_allowed() -> None:
    problem = Problem("length", '"abc" is not a length', "450", "hall.toml:12")
    assert str(problem) == 'hall.toml:12: length: "abc" is not a length; allowed: 450'
    assert str(problem.at("x:1")) == 'x:1: length: "abc" is not a length; allowed: 450'
    assert str(Problem("", "a", "b")) == "a; allowed: b"
    assert str(Problem("f", "a", "")) == "f: a"


def test_an_input_error_carries_every_problem() -> None:
    problems = (Problem("a", "1", "2"), Problem("b", "3", "4"))
    error = InputError(problems)
    assert error.problems == problems
    assert str(error) == "a: 1; allowed: 2\nb: 3; allowed: 4"
    assert InputError(problems[0]).problems == problems[:1]


def test_a_refusal_is_bad_input() -> None:
    refusal = Refusal(field="cut_b", given="30", allowed="at most 20")
    assert isinstance(refusal, InputError)
    assert refusal.problems == (Problem("cut_b", "30", "at most 20"),)


@pytest.mark.parametrize(
    ("error", "code"),
    [
        (DevelopError("x"), 2),
        (InputError(()), 2),
        (Refusal(field="", given="", allowed=""), 2),
        (WriteError("x"), 3),
    ],
)
def test_exit_codes(error: DevelopError, code: int) -> None:
    assert error.exit_code == code


def test_every_error_of_the_module_is_exported() -> None:
    errors = {
        name
        for name, value in vars(develop.errors).items()
        if isinstance(value, type) and issubclass(value, Exception)
    }
    assert errors == set(develop.errors.__all__) - {"Problem"}
    assert all(issubclass(getattr(develop.errors, name), DevelopError) for name in errors)


@given(st.text(st.characters()))
def test_text_that_was_given_is_repeated_on_one_line_that_can_be_written(text: str) -> None:
    said = shown(text)
    assert said.isprintable()
    assert len(said) <= 10 * 62
    said.encode("utf-8")


@pytest.mark.parametrize(
    ("given", "said"),
    [
        (True, "true"),
        (3.5, "3.5"),
        ([1, "a"], '[1, "a"]'),
        ({"slope": 3}, "{ slope = 3 }"),
        (10**200, "a number of over 60 digits"),
        ("\ud800", '"\\ud800"'),
        ("x" * 100, '"' + "x" * 57 + '..."'),
    ],
)
def test_values_are_repeated_as_a_job_file_has_them(given: object, said: str) -> None:
    assert shown(given) == said


def test_a_long_list_is_cut_short() -> None:
    assert len(shown(["x" * 50] * 1000)) <= 120


def test_words_as_a_list() -> None:
    assert listed(["a"]) == "a"
    assert listed(["a", "b"]) == "a or b"
    assert listed(iter(["a", "b", "c"])) == "a, b or c"


def test_the_near_miss_is_named() -> None:
    assert nearest("lenght", ["length", "offset"]) == "length"
    assert nearest("LENGHT", ["length"]) == "length"
    assert near_miss("lenght", ["length", "offset"]) == '; did you mean "length"?'
    assert near_miss("qqq", ["length"]) == ""
    assert near_miss("", ["length"]) == ""
    assert nearest("--lenght", ["--length", "--out"]) == "--length"
    assert nearest("--colour", ["--length", "--out"]) == ""
