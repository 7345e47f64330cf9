"""The errors: their lines, their exit codes, their place in the tree."""

import pytest

from optimizer.errors import InputError, NothingFeasible, Problem, WattfrontError


def test_problem_names_file_key_given_and_expected():
    problem = Problem('"5 A"', "a voltage", "application.ac_voltage", "a.toml")
    assert str(problem) == 'a.toml: application.ac_voltage: given "5 A", expected a voltage'


def test_problem_without_a_place_has_no_empty_parts():
    assert str(Problem("3", "a text")) == "given 3, expected a text"
    assert str(Problem("3", "a text").at("a.toml", "name")) == "a.toml: name: given 3, expected a text"


def test_input_error_prints_one_problem_a_line():
    error = InputError(Problem("1", "2", "a", "f"), Problem("3", "4", "b", "f"))
    assert str(error).splitlines() == ["f: a: given 1, expected 2", "f: b: given 3, expected 4"]
    assert [problem.key for problem in error.problems] == ["a", "b"]


def test_nothing_feasible_lists_the_constraint_failed_most_first():
    error = NothingFeasible([("saturation", 0.25, "0.36 T of 0.35 T"), ("junction", 0.99, "176 C of 175 C")])
    assert [constraint.constraint for constraint in error.constraints] == ["junction", "saturation"]
    lines = str(error).splitlines()
    assert lines[1] == "  junction: failed by 99.0% of the candidates; nearest miss: 176 C of 175 C"
    assert len(lines) == 3


@pytest.mark.parametrize(("error", "code"), [(InputError(), 2), (NothingFeasible([]), 1)])
def test_exit_codes(error, code):
    assert isinstance(error, WattfrontError)
    assert error.exit_code == code
