"""Rheology: how shear stress answers to shear rate."""

from pipeflow.rheology.general import Carreau, Cross, Ellis, GeneralRheology, RobertsonStiff, Sisko
from pipeflow.rheology.models import Bingham, Casson, HerschelBulkley, Newtonian, PowerLaw, Rheology

__all__ = [
    "Bingham",
    "Carreau",
    "Casson",
    "Cross",
    "Ellis",
    "GeneralRheology",
    "HerschelBulkley",
    "Newtonian",
    "PowerLaw",
    "Rheology",
    "RobertsonStiff",
    "Sisko",
]
