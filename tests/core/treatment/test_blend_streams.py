"""Two streams mixed: both ways, the laws, and what is refused."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from core.errors import InputError
from core.treatment import blending

HARDNESS = st.floats(0.0, 15.0)
SHARE = st.floats(0.0, 1.0)


@settings(max_examples=50, deadline=None)
@given(HARDNESS, HARDNESS, SHARE)
def test_blend_lies_between_its_parts(raw, softened, share):
    """No share makes a blend harder than its hardest or softer than its softest part."""
    mixed = blending.blend(raw, softened, share)
    slack = 1e-12 * max(raw, softened)
    assert min(raw, softened) - slack <= mixed <= max(raw, softened) + slack


@settings(max_examples=50, deadline=None)
@given(st.floats(1.0, 15.0), st.floats(0.0, 0.9), SHARE)
def test_share_and_blend_undo_each_other(raw, softened, share):
    """The share computed from a blend is the share it was mixed with."""
    assert blending.raw_share(raw, softened, blending.blend(raw, softened, share)) == pytest.approx(
        share, abs=1e-12
    ) or share in (0.0, 1.0)


def test_impossible_targets_are_nan_and_alone():
    """A target outside the two streams has no share; its neighbours are untouched."""
    shares = blending.raw_share(4.0, 0.1, np.array([0.05, 1.0, 5.0, np.nan]))
    assert np.isnan(shares).tolist() == [True, False, True, True]
    assert np.isnan(blending.blend(4.0, 0.0, [-0.1, 1.1])).all()


@pytest.mark.parametrize(
    ("raw", "softened", "target", "field", "word"),
    [
        (4.0, 0.1, 4.1, "target", "harder than the raw"),
        (4.0, 0.1, 0.05, "target", "softer than the softened"),
        (4.0, 4.0, 4.0, "softened hardness", "equally hard"),
        (1.0, 4.0, 2.0, "softened hardness", "which is which"),
        (float("nan"), 0.0, 2.0, "raw hardness", "missing"),
        (4.0, -1.0, 2.0, "softened hardness", "below zero"),
    ],
)
def test_refusal_says_why_and_what_to_enter(raw, softened, target, field, word):
    """What two streams cannot give is refused in a sentence, with the field."""
    with pytest.raises(InputError, match=word) as refusal:
        blending.check_blend(raw, softened, target)
    assert refusal.value.field == field


def test_possible_blends_pass():
    """Both ends and the middle are fine, one water or many."""
    blending.check_blend(4.0, 0.0, [0.0, 2.0, 4.0])
    blending.check_share([0.0, 0.5, 1.0])
    with pytest.raises(InputError, match="between 0 and 100"):
        blending.check_share(1.2)


def test_sodium_rises_with_what_is_removed_and_not_with_salt():
    """Two sodium ions for each hardness ion: equivalents in, equivalents out."""
    added_meq = blending.sodium_added(3.0) / 22.98976928
    assert added_meq == pytest.approx(2 * 3.0, rel=1e-12)
    assert blending.largest_removal(250.0, 200.0) == 0.0
