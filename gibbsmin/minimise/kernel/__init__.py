"""The compiled method: a linear programme for a start, then Newton's method on log balances.

The modules hold plain functions on arrays that both the interpreter and numba run.
"""
