"""Candidate pumps on the system curve of a case."""
