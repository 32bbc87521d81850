"""The first screen: the verdict first, worst rows first, every word kept at 80 columns, no colour needed."""

from __future__ import annotations

import io
import re
from dataclasses import replace

import pytest
from rich.console import Console

from crosscheck.comparison.comparing import join
from crosscheck.comparison.result import FeValue
from crosscheck.reports.screen import first_screen
from crosscheck.reports.wording import (
    difference_text,
    number_text,
    one_row_a_family,
    percent_text,
    verdict_sentence,
    worst_first,
)

from .stand_in import both_sides, channel_file


def text_of(result, width, *, unicode=True, colour=False, pictures=None):
    stream = io.StringIO()
    console = Console(
        file=stream, width=width, highlight=False, markup=False, force_terminal=colour, no_color=not colour
    )
    console.print(first_screen(result, width, unicode=unicode, pictures=pictures))
    return stream.getvalue()


@pytest.mark.parametrize("width", [80, 100, 120, 160])
def test_no_line_is_wider_than_the_screen(result, width):
    assert max(len(line) for line in text_of(result, width).splitlines()) <= width


@pytest.mark.parametrize("width", [80, 120])
def test_words_are_never_cut(result, width):
    text = text_of(result, width)
    assert "…" not in text
    for word in ("unconservative", "deflection", "torsion constant", "shear centre, x"):
        assert word in text


def test_the_bar_goes_at_80_columns(result):
    assert "█" not in text_of(result, 80)
    assert "█" in text_of(result, 120)


def test_title_units_and_sentence_come_first(result):
    lines = text_of(result, 80).splitlines()
    assert lines[0].startswith("Winch rail, plain channel")
    assert "units mm, N; per unit modulus" in lines[0]
    assert lines[1].startswith("Hand methods hold for ")


def test_worst_row_is_first(result):
    text = text_of(result, 80)
    assert text.index("outside (1 of") < text.index("warping constant  ") < text.index("within (")
    rows = worst_first(result.quantities)
    used = [row.criterion_used for row in rows if row.verdict == "within"]
    assert used == sorted(used, reverse=True)


def test_sentence_names_what_fails_how_and_for_what(result):
    sentence = verdict_sentence(result)
    assert "; not for the warping constant: 6.4 % high, unconservative for twist" in sentence


def test_sentence_counts_what_holds(result):
    found = re.match(r"Hand methods hold for (\d+) of (\d+) quantities", verdict_sentence(result))
    assert found is not None
    judged = [row for row in one_row_a_family(result.quantities) if row.verdict is not None]
    assert int(found[2]) == len(judged)
    assert int(found[1]) == sum(row.verdict == "within" for row in judged)


def test_sentence_when_all_holds():
    section = channel_file(criteria={"warping_constant": 0.2})
    sentence = verdict_sentence(join(section, *both_sides(section)))
    assert sentence.startswith("Hand methods hold for all ")
    assert "worst: " in sentence


def test_inconclusive_is_never_shown_as_agreement():
    section = channel_file(criteria={"torsion_constant": 0.02})
    result = join(section, *both_sides(section, half_width=0.01))
    text = text_of(result, 80)
    assert "inconclusive (1 of" in text
    assert "not decided for torsion constant" in " ".join(text.split())
    assert "the FE error is too large to tell" in text


def test_factor_to_use_is_shown_for_what_fails(result):
    assert "warping constant x 0.9400" in text_of(result, 80)


def test_failed_check_is_as_visible_as_a_verdict(result):
    broken = replace(result, checks=(replace(result.checks[0], passed=False, value=0.5),))
    text = text_of(broken, 80)
    assert "CHECK FAILED" in text
    assert "Checks: 0 of 1 passed" in text


def test_accuracy_not_reached_is_said(result):
    text = text_of(replace(result, accuracy_met=False, accuracy_note="stopped at the limit"), 80)
    assert "Accuracy 1e-05 was not reached: stopped at the limit" in text


def test_screen_says_what_it_is_not(result):
    text = " ".join(text_of(result, 80).split())
    assert "not test evidence, not approval" in text
    assert "licensed engineer" in text
    assert "Both sides assume" in text


def test_screen_says_where_the_pictures_are(result):
    assert "Pictures and result: report" in text_of(result, 80, pictures="report")
    assert "add --out FOLDER" in text_of(result, 80)


def test_no_escape_without_colour_and_no_other_letters_without_unicode(result):
    text = text_of(result, 120, unicode=False)
    assert "\x1b" not in text
    text.encode("ascii")


def test_control_sequences_in_a_title_never_reach_the_terminal():
    section = channel_file(title="rail\x1b[2J[bold]x[/bold]")
    text = text_of(join(section, *both_sides(section)), 80)
    assert "\x1b" not in text
    assert "[bold]x[/bold]" in text


@pytest.mark.parametrize(
    ("value", "text"),
    [(0.0, "0"), (342.7, "342.70"), (-24.3184, "-24.318"), (1666666.7, "1.6667e6"), (0.0033599, "3.360e-3"),
     (260416.7, "260420"), (None, "-"), (99999.9, "100000")],
)  # fmt: skip
def test_numbers_have_four_or_five_digits(value, text):
    assert number_text(value) == text


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (0.021, "2.1 %"),
        (-0.2659, "26.6 %"),
        (0.00034, "0.03 %"),
        (0.0063, "0.63 %"),
        (1e-7, "< 0.001 %"),
        (3.0, "300 %"),
    ],
)
def test_percentages(share, text):
    assert percent_text(share) == text


def test_too_negative_is_high_in_magnitude(result):
    row = replace(
        result.quantity("rate_of_twist", "gust"),
        fe=FeValue(-10.0, -10.0, -10.0, "exact"),
        theory={"midline": -11.0},
        difference={"midline": -0.1},
        normaliser=10.0,
    )
    assert difference_text(row, "mm") == "10.0 % high"


def test_a_difference_hidden_by_the_fe_error_has_no_direction(result):
    row = replace(result.quantity("shear_centre_x"), difference={"midline": 1e-6}, uncertainty=1e-5)
    assert difference_text(row, "mm") == "in FE error"
