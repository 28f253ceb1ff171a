"""All movements that strain nothing: the null space of a sparse matrix of strains.

The matrix of strains times itself is the stiffness of a frame of equal bars. It is factorised once, with a little
stiffness added everywhere so that it can be, and a block of random movements is driven towards the softest ones by
solving with it again and again (inverse iteration on a subspace). What then strains its bars by no more than rounding
is a mechanism. When the whole block is, a greater one is tried.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from scipy.sparse import csr_array

__all__ = ["MOST", "SOFTEST", "mechanisms"]

Floats = NDArray[np.float64]

#: Stiffness added everywhere: far below that of the softest frame (about 1e-8 for a hall of 250 m), far above rounding.
_ADDED = 1e-11
#: What is softer than this has no stiffness; rounding leaves about 1e-15 of it.
SOFTEST = 1e-11
#: Rounds of solving; each makes a movement of stiffness 1e-8 a thousand times smaller beside a mechanism.
_ROUNDS = 5
#: Mechanisms that are looked for at first, and at most.
_BLOCK = 6
MOST = 96


def mechanisms(strains: csr_array) -> Floats:
    """Give an orthonormal basis (u, m) of the movements that strain nothing; m is ``MOST`` where there are more.

    Args:
        strains: (rows, u).
    """
    from scipy.sparse import eye_array  # noqa: PLC0415 - heavy, and only checks need it
    from scipy.sparse.linalg import splu  # noqa: PLC0415 - as above

    unknowns = strains.shape[1]
    if not unknowns:
        return np.zeros((0, 0))
    stiffness = (strains.T @ strains).tocsc()
    solver = splu(
        (stiffness + _ADDED * eye_array(unknowns, format="csc")).tocsc(),
        permc_spec="MMD_AT_PLUS_A",
        diag_pivot_thresh=0.0,
        options={"SymmetricMode": True},
    )
    block = min(_BLOCK, unknowns)
    while True:
        movements = np.random.default_rng(0).standard_normal((unknowns, block))
        for _ in range(_ROUNDS):
            movements, _ = np.linalg.qr(solver.solve(movements))
        energy, mix = np.linalg.eigh((strains @ movements).T @ (strains @ movements))
        free = energy < SOFTEST
        if not free.all() or block in (MOST, unknowns):
            return np.asarray(movements @ mix[:, free])
        block = min(4 * block, MOST, unknowns)
