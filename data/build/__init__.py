"""Remakes every table of the library from its published sources."""
