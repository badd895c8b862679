"""Tableaus kept by the pivots that lead to them."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from benchmarks.systems import ordinary, torture
from numpy.testing import assert_array_equal

from gibbsmin.minimise import Programme
from gibbsmin.minimise.kernel.lane_storage import lane_scratch_for
from gibbsmin.minimise.kernel.loading import load_state
from gibbsmin.minimise.kernel.pivots import spare_place
from gibbsmin.minimise.kernel.simplex import find_basis
from gibbsmin.minimise.kernel.storage import network_of


@pytest.mark.parametrize("places", [3, 200])
@pytest.mark.parametrize("kind", [ordinary, torture])
def test_a_tableau_found_is_the_one_computed(
    kind: Callable[[str, int], Programme], places: int
) -> None:
    """To the bit, whatever was met before and however few can be kept."""
    programme = kind("sulphur", 30)
    network = network_of(programme.matrix, programme.gas, programme.direction, programme.atoms)
    kept = lane_scratch_for(network, places, 1)
    spared = 0
    for energies, supplies in zip(programme.energies, programme.supplies, strict=True):
        fresh = lane_scratch_for(network, 0, 1)
        found = []
        for scratch in (kept, fresh):
            load_state(network, scratch.state, energies, supplies)
            with np.errstate(all="ignore"):
                found.append(
                    find_basis(
                        network,
                        scratch.state,
                        scratch.tableau,
                        scratch.pivots,
                        scratch.equations,
                        True,
                    )
                )
        place = found[0]
        spared += place == spare_place(kept.pivots)
        assert found[1] == 0
        assert_array_equal(kept.pivots.entries[place], fresh.pivots.entries[0])
        assert_array_equal(kept.pivots.basis[place], fresh.pivots.basis[0])
        assert kept.pivots.rank[place] == fresh.pivots.rank[0]
        assert_array_equal(kept.tableau.reduced, fresh.tableau.reduced)
        assert_array_equal(kept.tableau.supply, fresh.tableau.supply)
    assert (spared > 0) == (places == 3)
