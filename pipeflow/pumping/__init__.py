"""Pumps on a line: their curves, what a slurry does to them, where they run. Physics only, in SI units."""
