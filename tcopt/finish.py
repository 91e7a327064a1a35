"""From a design back to a study in which nothing is open: what `design` writes down."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits import GIVEN
from tcopt.operation import Operation

if TYPE_CHECKING:
    from tcopt.study import OpenSlot, Study

__all__ = ["finished_study"]


def finished_study(operation: Operation) -> Study:
    """Return the study of a design, every slot with its parts and every choice settled.

    Checked, it gives the very figures of the design.

    Parameters
    ----------
    operation : a design with a mix in every slot that its study names
    """
    from tcopt.study import FixedSlot, Study  # noqa: PLC0415  this layer lies below the gate

    study, choices = operation.study, operation.choices
    made = study.circuit
    settled: dict[str, object] = {name: (getattr(choices, name),) for name in made.circuit.choices}
    if made.feed == GIVEN:
        settled |= {"input_current": (choices.input_current,), "current_ratio": None}
    given = {name: getattr(made, name) for name in made.model_fields_set}
    resistors: dict[str, FixedSlot | OpenSlot] = {
        name: FixedSlot.model_validate(
            {"parts": operation.mixes[name].parts, "join": operation.mixes[name].join}
        )
        for name in study.resistors
    }
    everything = {name: getattr(study, name) for name in Study.model_fields}
    circuit = type(made)(**{**given, **settled})
    return Study(**{**everything, "circuit": circuit, "resistors": resistors})
