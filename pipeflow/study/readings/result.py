"""The answers that rest on the rheology: losses by rival laws, and past the shear rates tested."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class LawLoss:
    """Friction, fittings and equipment of the line with one law at design flow, Pa."""

    model: str
    pressure_loss: float
    pressure_loss_upper: float


@dataclass(frozen=True)
class BeyondTested:
    """One flow at which some pipes shear far faster than tested: losses by the law, and by its tangent, Pa.

    ``pressure_loss_tangent`` is None where the law has no tangent known.
    """

    at: str
    flow: float
    pipes: tuple[str, ...]
    wall_shear_rate: float
    pressure_loss: float
    pressure_loss_upper: float
    pressure_loss_tangent: float | None
    pressure_loss_tangent_upper: float | None


@dataclass(frozen=True)
class RheologyAnswers:
    """The answers; empty where the case neither names readings nor leaves a tested range far behind.

    ``by_law`` has the law taken first, then its rivals. ``tangent_method`` is the key of the turbulent method the
    tangent was solved by where the one of the law is not made for it.
    """

    by_law: tuple[LawLoss, ...] = ()
    beyond: tuple[BeyondTested, ...] = ()
    highest_tested: float = 0.0
    tangent_method: str = ""

    @property
    def for_design(self) -> LawLoss | None:
        """The law with the highest loss, where there are rivals."""
        return max(self.by_law, key=lambda law: law.pressure_loss, default=None)
