"""The sizes of a case, and the most a line takes."""
