"""Colours and sizes: readable in every theme, tappable with a wet thumb."""

import itertools

import pytest

from pwa import theme


def _luminance(colour: str) -> float:
    """Relative luminance by WCAG 2.2."""
    parts = [int(colour[at : at + 2], 16) / 255 for at in (1, 3, 5)]
    linear = [part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one: str, other: str) -> float:
    """Contrast ratio by WCAG 2.2."""
    light, dark = sorted((_luminance(one), _luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


@pytest.mark.parametrize(("dark", "high"), [(False, False), (False, True), (True, False), (True, True)])
def test_text_can_be_read_on_every_ground(dark, high):
    """Every ink on every ground it stands on: 4.5 to 1 (WCAG 2.2 AA), 7 to 1 in the contrast themes (AAA)."""
    colours = theme.palette(dark=dark, contrast=high)
    least = 7.0 if high else 4.5
    inks = (colours.ink, colours.quiet, colours.accent, colours.good, colours.watch, colours.bad)
    pairs = list(itertools.product(inks, (colours.ground, colours.card, colours.raised)))
    pairs += [(colours.on_accent, colours.accent), (colours.on_accent_soft, colours.accent_soft)]

    low = {pair: round(contrast(*pair), 2) for pair in pairs if contrast(*pair) < least}

    assert not low


@pytest.mark.parametrize("dark", [False, True])
def test_edges_of_fields_are_seen(dark):
    """The outline of a box to type in: 3 to 1 against its ground (WCAG 2.2, non-text)."""
    colours = theme.palette(dark=dark, contrast=False)

    assert min(contrast(colours.edge, ground) for ground in (colours.ground, colours.card, colours.raised)) >= 3.0


def test_targets_are_wide_enough_for_a_wet_thumb():
    """48 logical pixels is the least of anything to be tapped."""
    assert theme.TOUCH >= 48


def test_text_grows_to_twice_its_size():
    """The largest text is twice the usual."""
    usual, largest = (theme.theme(theme.LIGHT, theme.SCALES[key]) for key in ("normal", "largest"))

    assert largest.text_theme.body_medium.size == 2 * usual.text_theme.body_medium.size
