"""Names and GlobalIds of the property sets that carry results."""

from __future__ import annotations

import binascii
import hashlib
import uuid
from collections.abc import Sequence

import numpy as np

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


Identity = tuple[str, int, str]
"""GlobalId of a beam, its ordinal among repeats, and the name of one of its result sets"""


def set_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of a beam's result set: the same in every run."""
    return set_and_relation_guids([(beam_guid, ordinal, set_name)])[0][0]


def relation_guid(beam_guid: str, ordinal: int, set_name: str) -> str:
    """Return the GlobalId of the relation that ties a result set to its beam."""
    return set_and_relation_guids([(beam_guid, ordinal, set_name)])[0][1]


def set_and_relation_guids(identities: Sequence[Identity]) -> list[tuple[str, str]]:
    """Return both GlobalIds of many sets at once.

    They are UUIDs of version 5, that of the relation by the set's name with a word after it.
    """
    digests: list[bytes] = []
    for beam_guid, ordinal, set_name in identities:
        name = f"{beam_guid}\n{ordinal}\n{set_name}".encode()
        hashed = hashlib.sha1(_NAMESPACE + name, usedforsecurity=False)
        digests.append(hashed.digest())
        hashed.update(b"\nrelation")
        digests.append(hashed.digest())
    guids = _spelled(digests)
    return list(zip(guids[::2], guids[1::2], strict=True))


def _spelled(digests: Sequence[bytes]) -> list[str]:
    """Return UUIDs of version 5 by their names' digests, in the 22 digits of an IFC GlobalId.

    Written out because ``uuid`` and ``ifcopenshell.guid`` together take many times as long, which
    is felt on thousands of beams.
    """
    # 16 zero bits before each make 24 digits of 6 bits, the first two of which are left out
    bits = np.zeros((len(digests), 18), np.uint8)
    bits[:, 2:] = np.frombuffer(b"".join(digests), np.uint8).reshape(-1, 20)[:, :16]
    bits[:, 8] = bits[:, 8] & 0x0F | 0x50
    bits[:, 10] = bits[:, 10] & 0x3F | 0x80
    digits = binascii.b2a_base64(bits.tobytes(), newline=False).translate(_TO_IFC_DIGITS).decode()
    return [digits[first + 2 : first + 24] for first in range(0, len(digits), 24)]
