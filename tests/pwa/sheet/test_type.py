"""Lines and signs: text is broken to a width without losing a sign."""

from dataclasses import dataclass

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pwa.sheet.type import BODY, Style, lines_of, printable

SIGNS = {ord(sign) for sign in "abcdefghijklmnopqrstuvwxyzäé ₃□"}


@dataclass(frozen=True)
class Even:
    """A font whose signs are all as wide as the size."""

    signs = SIGNS

    def width(self, text: str, style: Style) -> float:
        """So many signs, so wide."""
        return len(text) * style.size


def ten(text, width, first=0):
    """Lines of so many signs."""
    return lines_of(text, BODY, width * BODY.size, Even(), first * BODY.size)


@pytest.mark.parametrize(
    ("text", "lines"),
    [
        ("", [""]),
        ("one", ["one"]),
        ("one two three", ["one two", "three"]),
        ("a\nb", ["a", "b"]),
        ("a\n\nb", ["a", "", "b"]),
        ("abcdefghijkl", ["abcdefgh", "ijkl"]),
        ("ab abcdefghijkl", ["ab", "abcdefgh", "ijkl"]),
        ("a\u00a0b\u00a0c\u00a0d x", ["a\u00a0b\u00a0c\u00a0d", "x"]),
    ],
)
def test_lines_of_eight_signs(text, lines):
    """Words stay whole where they can; a hard space does not break."""
    assert ten(text, 8) == lines


def test_the_first_line_may_be_shorter():
    """A word before the text takes its room; what does not fit beside it begins below."""
    assert ten("one two three", 8, first=4) == ["one", "two", "three"]
    assert ten("abcdefgh", 8, first=4) == ["", "abcdefgh"]


@settings(deadline=None)
@given(st.text("abc \n", max_size=200), st.integers(1, 12), st.integers(0, 5))
def test_no_sign_is_lost_and_no_line_too_wide(text, width, first):
    """Whatever the text and the width."""
    lines = ten(text, width, min(first, width))
    assert "".join(lines).replace(" ", "") == text.replace(" ", "").replace("\n", "")
    assert all(len(line) <= width for line in lines)


@pytest.mark.parametrize(
    ("text", "shown"),
    [
        ("ab", "ab"),
        ("a\u0308", "ä"),
        ("a漢", "a□"),
        ("a\ufe0f\u200d", "a"),
        ("a\tb", "a b"),
        ("a\u2009b", "a b"),
        ("\x00", " "),
    ],
)
def test_signs_that_the_font_has_not(text, shown):
    """Composed where that helps, else □; joiners vanish, spaces are spaces."""
    assert printable(text, SIGNS) == shown
