from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.minimise import Method, Status


@pytest.mark.parametrize("kind", [Status, Method])
def test_every_member_has_a_sentence_of_its_own(kind: type[Status] | type[Method]) -> None:
    sentences = [member.sentence for member in kind]
    assert len(set(sentences)) == len(sentences)
    assert all(sentence[0].isupper() and sentence.endswith(".") for sentence in sentences)


@pytest.mark.parametrize("kind", [Status, Method])
def test_members_travel_through_small_integers(kind: type[Status] | type[Method]) -> None:
    codes = np.array(list(kind), dtype=np.int8)
    assert [kind(code) for code in codes] == list(kind)
