"""Catalogues that a non-programmer can read and extend, each entry with its source."""
