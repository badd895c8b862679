"""The library's tables, installed as package data."""
