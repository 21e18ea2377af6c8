"""Names from catalogues harm neither a figure nor a file system."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from starkiln.report._text import drawable, file_stem, plain_line, star_label

NASTY = (
    "../../etc/passwd",
    "a/b\\c",
    'say "x"',
    "<script>",
    "δλ Δ",
    "",
    "x" * 400,
    "CON",
    "a\nb",
    "$x$",
)


@given(name=st.text(max_size=300), row=st.integers(1, 10**6))
def test_a_file_name_is_portable(name, row):
    stem = file_stem(name, row)
    assert stem.isascii()
    assert all(letter.isalnum() or letter in "_+-" for letter in stem)
    assert 5 <= len(stem) <= 62
    assert stem.startswith(f"{row:05d}")


def test_every_star_has_a_file_of_its_own():
    stems = [file_stem(name, row) for row, name in enumerate(NASTY + NASTY, start=1)]
    assert len(set(stem.lower() for stem in stems)) == 2 * len(NASTY)
    assert file_stem("Kiln 7", 3) == "00003_Kiln_7"
    assert file_stem("", 3) == "00003"


@given(name=st.text(max_size=300))
def test_a_line_is_one_line(name):
    line = plain_line(name, 30)
    assert len(line) <= 30
    assert line.isprintable()


def test_labels():
    assert star_label("  ", 4) == "row 4"
    assert plain_line("a" * 50, 10) == "a" * 9 + "…"


@pytest.mark.parametrize(("text", "shown"), [("\u03b4 Kiln", "\u03b4 Kiln"), ("星 7", "\ufffd 7")])
def test_letters_without_a_glyph_are_marked(text, shown):
    assert drawable(text) == shown
