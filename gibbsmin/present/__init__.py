"""Formats results for people and for programs: tables, documents and files."""
