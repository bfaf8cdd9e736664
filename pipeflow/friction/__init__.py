"""Friction: the wall shear stress of a full pipe at a given velocity, and the methods behind it."""

from pipeflow.friction.solver import PipeFlow, Regime, Status, bulk_velocity, solve_pipes, wall_shear_stress

__all__ = ["PipeFlow", "Regime", "Status", "bulk_velocity", "solve_pipes", "wall_shear_stress"]
