"""Physical constants, in SI units."""

STANDARD_GRAVITY = 9.80665
"""Standard acceleration of gravity, m/s² (ISO 80000-3)."""
