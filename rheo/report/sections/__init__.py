"""Sections of the design note: results in, blocks of text, tables and figures out."""
