"""Names and GlobalIds of the property sets that carry results."""

from __future__ import annotations

import binascii
import hashlib
import uuid

RESULT_SET_NAMES = (
    "BeamRating_Result",
    "BeamRating_LimitStates",
    "BeamRating_SafeLoads",
    "BeamRating_Basis",
)
"""The sets that are written, and so may be taken away again; BeamRating_Reinforcement is input."""

_NAMESPACE = uuid.UUID("5b0b2f6e-6a53-4c0e-9d43-3f1d6a0c8e21").bytes
_TO_IFC_DIGITS = bytes.maketrans(
    b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/",
    b"0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz_$",
)


def set_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of a beam's result set: the same in every run."""
    return _derived(f"{beam_guid}\n{ordinal}\n{set_name}")


def relation_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of the relation that ties a result set to its beam."""
    return _derived(f"{beam_guid}\n{ordinal}\n{set_name}\nrelation")


def _derived(name: str) -> str:
    """Return the name's UUID of version 5 in the 22 digits of an IFC GlobalId.

    Written out because ``uuid`` and ``ifcopenshell.guid`` together take four times as long, which
    is felt on thousands of beams.
    """
    bits = bytearray(hashlib.sha1(_NAMESPACE + name.encode(), usedforsecurity=False).digest()[:16])
    bits[6] = bits[6] & 0x0F | 0x50
    bits[8] = bits[8] & 0x3F | 0x80
    # 16 more zero bits make 24 digits of 6 bits
    digits = binascii.b2a_base64(b"\0\0" + bits, newline=False)[2:]
    return digits.translate(_TO_IFC_DIGITS).decode()
