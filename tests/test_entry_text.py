"""What a person types for a number: values, sums, units; the refusal of what is ambiguous."""

import ast
import operator
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from server.entry_text import EntryRefused, allowed_units, read_entry, wrong_unit
from server.units import UNITS, Dimension, symbols


@pytest.mark.parametrize(
    ("text", "dimension", "unit", "value", "symbol", "typed"),
    [
        ("54", Dimension.LENGTH, "m", 54.0, "m", None),
        ("850 gpm", Dimension.FLOW, "L/s", 850.0, "gpm_us", None),
        ("850gpm", Dimension.FLOW, "L/s", 850.0, "gpm_us", None),
        ("3*18.5", Dimension.LENGTH, "m", 55.5, "m", "3*18.5"),
        ("3*18.5 ft", Dimension.LENGTH, "m", 55.5, "ft", "3*18.5"),
        ("1 200", Dimension.LENGTH, "m", 1200.0, "m", None),
        ("1\u202f200.5", Dimension.LENGTH, "m", 1200.5, "m", None),
        ("1,234.5", Dimension.LENGTH, "m", 1234.5, "m", None),
        ("1,234,567", Dimension.LENGTH, "mm", 1234567.0, "mm", None),
        ("-40", Dimension.PRESSURE, "kPa", -40.0, "kPa", None),
        ("−40 kPa", Dimension.PRESSURE, "psi", -40.0, "kPa", None),
        ("20 psi", Dimension.PRESSURE, "kPa", 20.0, "psi", None),
        ("72 ft", Dimension.LEVEL, "m", 72.0, "ft", None),
        ("72'", Dimension.LEVEL, "m", 72.0, "ft", None),
        ("6 m³/h", Dimension.FLOW, "L/s", 6.0, "m3/h", None),
        ("2.5 ML/d", Dimension.FLOW, "L/s", 2.5, "ML/d", None),
        ("59 °F", Dimension.TEMPERATURE, "degC", 59.0, "degF", None),
        ("85 %", Dimension.RATIO, "%", 85.0, "%", None),
        ("0.1+0.2", Dimension.NUMBER, "1", 0.3, "1", "0.1+0.2"),
        ("2*(3+4)/7", Dimension.NUMBER, "1", 2.0, "1", "2*(3+4)/7"),
        ("1.5e3", Dimension.LENGTH, "m", 1500.0, "m", None),
        (".5", Dimension.NUMBER, "1", 0.5, "1", None),
        ("5.", Dimension.NUMBER, "1", 5.0, "1", None),
        ("4 litres per second", Dimension.FLOW, "m3/h", 4.0, "L/s", None),
    ],
)  # fmt: skip
def test_a_clear_text_is_read(text, dimension, unit, value, symbol, typed):
    read = read_entry(text, dimension, unit)

    assert (read.value, read.unit, read.typed) == (value, symbol, typed)


@pytest.mark.parametrize(
    ("text", "dimension", "phrase"),
    [
        ("", Dimension.LENGTH, "Nothing was typed"),
        ("1,234", Dimension.LENGTH, "may be 1234 or 1.234"),
        ("12,5", Dimension.LENGTH, "write the decimals behind a point"),
        ("1,23,456", Dimension.LENGTH, "has a comma"),
        ("12 5", Dimension.LENGTH, "more than one number"),
        ("1.2.3", Dimension.LENGTH, "more than one decimal point"),
        ("high", Dimension.LENGTH, "high is not a number"),
        ("2 +", Dimension.LENGTH, "a number is missing at the end"),
        ("(2", Dimension.LENGTH, "bracket that is not closed"),
        ("2)", Dimension.LENGTH, "bracket that was not opened"),
        ("1/0", Dimension.LENGTH, "divides by zero"),
        ("1/(3-3)", Dimension.LENGTH, "divides by zero"),
        ("5 ft 6 in", Dimension.LENGTH, "write the unit once"),
        ("20 m + 5 ft", Dimension.LENGTH, "write the unit once"),
        ("5 furlongs", Dimension.LENGTH, "furlongs is not a unit"),
        ("5²", Dimension.LENGTH, "is not a unit"),
        ("5½", Dimension.LENGTH, "is not a unit"),
        ("٣", Dimension.LENGTH, "is not a number"),
        ("1e999", Dimension.LENGTH, "outside what can be entered"),
        ("1" * 200, Dimension.LENGTH, "longer than 120 signs"),
        ("(" * 60 + "1", Dimension.LENGTH, "too many brackets"),
        ("__import__('os')", Dimension.LENGTH, "is not a number"),
        ("2**3", Dimension.LENGTH, "is not a number"),
        ("5 m", Dimension.NUMBER, "without a unit"),
    ],
)
def test_an_unclear_text_is_refused_in_words(text, dimension, phrase):
    with pytest.raises(EntryRefused) as refused:
        read_entry(text, dimension, symbols(dimension)[0])

    assert phrase in refused.value.sentence
    assert refused.value.allowed == allowed_units(dimension)


def test_a_head_typed_in_a_pressure_field_is_refused_naming_both():
    with pytest.raises(
        EntryRefused, match="A pressure is asked for, in kPa.*m is a unit of a head"
    ):
        read_entry("25 m", Dimension.PRESSURE, "kPa")


def test_a_pressure_typed_in_a_head_field_is_refused_naming_both():
    with pytest.raises(EntryRefused, match="A head is asked for.*psi is a unit of a pressure"):
        read_entry("25 psi", Dimension.HEAD, "m")


def test_every_unit_can_be_typed_as_it_is_printed_and_as_in_files():
    for dimension in Dimension:
        for symbol in symbols(dimension):
            for written in {UNITS[symbol].printed, symbol} - {"", "1"}:
                assert (
                    read_entry(f"2 {written}", dimension, symbols(dimension)[0]).unit == symbol
                )


def test_a_wrong_unit_of_every_dimension_has_words():
    for dimension in Dimension:
        for symbol in UNITS:
            if symbol not in symbols(dimension):
                assert "is asked for" in wrong_unit(symbol, dimension)


_OPERATORS = {ast.Add: operator.add, ast.Sub: operator.sub, ast.Mult: operator.mul}


def _value(node: ast.expr) -> Fraction:
    if isinstance(node, ast.BinOp):
        return _OPERATORS[type(node.op)](_value(node.left), _value(node.right))
    if isinstance(node, ast.UnaryOp):
        return -_value(node.operand)
    assert isinstance(node, ast.Constant)
    return Fraction(str(node.value))


_sums = st.recursive(
    st.integers(0, 999).map(str) | st.decimals(0, 99, places=2).map(str),
    lambda inner: st.tuples(inner, st.sampled_from("+-*"), inner).map(
        lambda t: f"({' '.join(t)})"
    ),
    max_leaves=6,
)


@given(_sums)
def test_a_sum_is_what_an_exact_reading_of_the_same_text_gives(text):
    if len(text) > 120:
        return

    assert read_entry(text, Dimension.NUMBER, "1").value == float(
        _value(ast.parse(text, mode="eval").body)
    )


@given(st.text(max_size=40))
def test_any_text_is_read_or_refused_and_nothing_else(text):
    try:
        read = read_entry(text, Dimension.PRESSURE, "kPa")
    except EntryRefused:
        return
    assert abs(read.value) < float("inf")
    assert read.unit in symbols(Dimension.PRESSURE)


@given(st.floats(0, 1e9, allow_nan=False))
def test_a_number_typed_as_it_is_shown_is_the_same_number(value):
    assert read_entry(repr(value), Dimension.NUMBER, "1").value == value
