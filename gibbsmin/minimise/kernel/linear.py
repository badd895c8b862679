"""Gaussian elimination for the kernel's few unknowns."""

from __future__ import annotations

from gibbsmin.arrays import FloatArray


def solve_in_place(matrix: FloatArray, right: FloatArray, size: int) -> bool:
    """Solve ``matrix[:size, :size] x = right[:size]`` into ``right``; False where singular.

    Partial pivoting; both arguments are overwritten.
    """
    for k in range(size):
        pivot = k
        for i in range(k + 1, size):
            if abs(matrix[i, k]) > abs(matrix[pivot, k]):
                pivot = i
        if not abs(matrix[pivot, k]) > 1e-200:
            return False
        if pivot != k:
            for j in range(k, size):
                matrix[k, j], matrix[pivot, j] = matrix[pivot, j], matrix[k, j]
            right[k], right[pivot] = right[pivot], right[k]
        inverse = 1.0 / matrix[k, k]
        for i in range(k + 1, size):
            factor = matrix[i, k] * inverse
            if factor != 0.0:
                for j in range(k + 1, size):
                    matrix[i, j] -= factor * matrix[k, j]
                right[i] -= factor * right[k]
    for k in range(size - 1, -1, -1):
        total = right[k]
        for j in range(k + 1, size):
            total -= matrix[k, j] * right[j]
        right[k] = total / matrix[k, k]
    return True
