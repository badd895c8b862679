"""Turns streams and stages into convex programmes, and their solutions back into chemistry."""
