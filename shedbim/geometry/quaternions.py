"""Rotations as unit quaternions (x, y, z, w): x, y, z along the axis, w the cosine of half the angle."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from shedbim.geometry.placements import Placements

__all__ = ["quaternions"]

#: Any component this large, squared and times four, gives the others without loss of digits. One always is.
_LARGE = 0.5


def quaternions(motion: Placements) -> NDArray[np.float64]:
    """Give the unit quaternions (n, 4) of the rotations of placements (n, 3, 4).

    A rotation has two quaternions of opposite signs: the one given has the last of its components that is
    not small positive, so that equal rotations give equal numbers but for rounding.
    """
    (xx, xy, xz), (yx, yy, yz), (zx, zy, zz) = np.moveaxis(motion[:, :, :3], 0, 2)
    # Four times the product of each component with each other, read off the rotation matrix.
    products = np.array(
        [
            [1 + xx - yy - zz, xy + yx, xz + zx, zy - yz],
            [xy + yx, 1 - xx + yy - zz, yz + zy, xz - zx],
            [xz + zx, yz + zy, 1 - xx - yy + zz, yx - xy],
            [zy - yz, xz - zx, yx - xy, 1 + xx + yy + zz],
        ]
    ).transpose(2, 0, 1)
    squares = np.einsum("nii->ni", products)
    chosen = 3 - np.argmax(squares[:, ::-1] >= _LARGE, axis=1)
    rows = products[np.arange(len(motion)), chosen]
    turned: NDArray[np.float64] = rows / np.linalg.norm(rows, axis=1)[:, None]
    return turned
