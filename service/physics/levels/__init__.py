"""The ladders of levels that confinement makes."""
