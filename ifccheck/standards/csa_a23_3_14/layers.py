"""The layers of bars of members, with the lengths over which they develop."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ifccheck.mechanics.arrays import ANCHOR_FULL, ANCHOR_HOOK, OWN, Floats, Ints, Members
from ifccheck.standards.csa_a23_3_14 import development
from ifccheck.standards.csa_a23_3_14.materials import GREATEST_YIELD
from ifccheck.standards.csa_a23_3_14.section_states import Layers


def with_bars(members: Members, farthest: int) -> Members:
    """The members without bars of slabs that lie farther out than NEAR_WEB, or than OWN.

    Those that stay count with no more than the greatest fy that may be used (8.5.1).
    """
    place = members.layer_place
    if place is None:
        return members
    capped = np.minimum(members.layer_yield, GREATEST_YIELD)
    return replace(
        members,
        layer_area=np.where(place > farthest, 0.0, members.layer_area),
        layer_yield=np.where(place > OWN, capped, members.layer_yield),
    )


def layers_of(members: Members) -> Layers:
    """Layers with their development lengths from either end."""
    m = members
    strength = m.concrete_strength[:, None]
    density = m.density_factor[:, None]
    bundle = np.ones_like(m.layer_area, dtype=np.intp) if m.layer_bundle is None else m.layer_bundle
    longer = _longer(m, bundle)
    straight = longer * development.development_length(
        diameter=m.layer_diameter,
        steel_yield=m.layer_yield,
        concrete_strength=strength,
        # a bundle counts as one bar of equal area, whose cover is told in its own diameters
        cover_distance=m.layer_cover_distance / np.sqrt(bundle),
        top_bar=m.layer_height > development.DEPTH_BELOW_TOP_BARS,
        density_factor=density,
        bar_area=m.layer_bar_area,
    )
    hooked = longer * development.hook_development_length(
        diameter=m.layer_diameter,
        steel_yield=m.layer_yield,
        concrete_strength=strength,
        density_factor=density,
    )
    least = longer * development.compression_development_length(
        diameter=m.layer_diameter, steel_yield=m.layer_yield, concrete_strength=strength
    )
    pulled = [
        np.select(
            [m.layer_area <= 0.0, anchor == ANCHOR_FULL, anchor == ANCHOR_HOOK],
            [np.inf, 0.0, hooked],
            straight,
        )
        for anchor in (m.layer_start_anchor, m.layer_end_anchor)
    ]
    pushed = [np.where(length > 0.0, np.maximum(length, least), length) for length in pulled]
    return Layers(
        m.layer_height, m.layer_area, m.layer_diameter, m.layer_yield, m.layer_start, m.layer_end,
        *(*pulled, *pushed, *_beyond(m)),
    )  # fmt: skip


def _longer(members: Members, bundle: Ints) -> Floats:
    """How many times longer the bars of each layer develop for being bundled or lapped.

    Every tension lap is taken as one of class B (12.15.2); bars develop over the whole of it, so
    that two of them give no more than one where the lap is just as long as that class asks for.
    """
    factor = development.bundle_factor(bundle)
    if members.layer_lapped is None:
        return factor
    return np.where(members.layer_lapped, development.LAPPED, 1.0) * factor


def _beyond(members: Members) -> tuple[Floats, Floats]:
    """Length beyond start and end of each layer over which its bars develop too [mm].

    What goes on may be a top bar though the layer is none, and develops over 1.3 times the length
    there (12.2.4).
    """
    if members.layer_beyond is None:
        nothing = np.zeros(members.layer_area.shape)
        return nothing, nothing
    counting = members.layer_beyond / development.TOP_BAR_FACTOR
    return counting[..., 0], counting[..., 1]
