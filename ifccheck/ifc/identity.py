"""Names and GlobalIds of the property sets that carry results."""

from __future__ import annotations

import uuid

import ifcopenshell.guid

RESULT_SET_NAMES = (
    "BeamRating_Result",
    "BeamRating_LimitStates",
    "BeamRating_SafeLoads",
    "BeamRating_Basis",
)
"""The sets that are written, and so may be taken away again; BeamRating_Reinforcement is input."""

_NAMESPACE = uuid.UUID("5b0b2f6e-6a53-4c0e-9d43-3f1d6a0c8e21")


def set_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of a beam's result set: the same in every run."""
    return _derived(beam_guid, str(ordinal), set_name)


def relation_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of the relation that ties a result set to its beam."""
    return _derived(beam_guid, str(ordinal), set_name, "relation")


def _derived(*parts: str) -> str:
    name = "\n".join(parts)
    return str(ifcopenshell.guid.compress(uuid.uuid5(_NAMESPACE, name).hex))
