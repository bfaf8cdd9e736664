"""Rheology: how shear stress answers to shear rate."""

from pipeflow.rheology.models import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

__all__ = ["Bingham", "Casson", "HerschelBulkley", "Newtonian", "PowerLaw", "Rheology"]
