"""Made-up beams of one rectangular section, prepared for CSA A23.3-14, and what acts on them."""

from __future__ import annotations

import numpy as np

from ifccheck.mechanics.arrays import ANCHOR_FULL, Demand, Members, Stations
from ifccheck.standards.contract import Options
from ifccheck.standards.csa_a23_3_14 import STANDARD
from ifccheck.standards.csa_a23_3_14.sections import Prepared


def a(value) -> np.ndarray:
    return np.array(value, dtype=np.float64)


WIDTH, HEIGHT, SPAN = 400.0, 600.0, 8000.0


def beam(x=(4000.0,), *, method="general", **kinds) -> Prepared:
    """A beam 400 wide; soffit bars at 60 mm, top bars 60 mm below the top."""
    return STANDARD.prepare(*rows(x, **kinds), Options(method))


def rows(
    x=(4000.0,),
    *,
    strength=30.0,
    aggregate=20.0,
    bar_yield=400.0,
    soffit_area=1500.0,
    top_area=600.0,
    soffit_start=-np.inf,
    stirrup_area=200.0,
    spacing=250.0,
    stirrup_yield=400.0,
    height=HEIGHT,
    faces=(0.0, SPAN),
    anchor=ANCHOR_FULL,
) -> tuple[Members, Stations]:
    """The beam and its stations as arrays."""
    x = np.asarray(x, dtype=np.float64)
    n = x.size
    members = Members(
        concrete_strength=a([strength]),
        density_factor=a([1.0]),
        aggregate_size=a([aggregate]),
        span=a([SPAN]),
        layer_height=a([[60.0, height - 60.0]]),
        layer_area=a([[soffit_area, top_area]]),
        layer_bar_area=a([[500.0, 500.0]]),
        layer_diameter=a([[25.2, 25.2]]),
        layer_yield=np.full((1, 2), bar_yield),
        layer_start=a([[soffit_start, -np.inf]]),
        layer_end=np.full((1, 2), np.inf),
        layer_start_anchor=np.array([[anchor, ANCHOR_FULL]]),
        layer_end_anchor=np.full((1, 2), ANCHOR_FULL),
        layer_cover_distance=np.full((1, 2), 60.0),
        strips=a([[[0.0, height, WIDTH, WIDTH]]]),
        overhang_left=np.zeros(1),
        overhang_right=np.zeros(1),
        flange_thickness=np.zeros(1),
    )
    stations = Stations(
        beam=np.zeros(n, dtype=np.intp),
        section=np.zeros(n, dtype=np.intp),
        x=x,
        side=np.zeros(n, dtype=np.intp),
        stirrup_area=np.full(n, stirrup_area),
        stirrup_spacing=np.full(n, spacing if stirrup_area != 0.0 else np.inf),
        stirrup_yield=np.full(n, stirrup_yield),
        inside=(x >= faces[0] - 1e-6) & (x <= faces[1] + 1e-6),
        shear_loss=np.zeros(n),
    )
    return members, stations


def demand(
    moment, shear, *, critical=None, sag=True, hog=False, peak_sagging=1e12, peak_hogging=0.0
) -> Demand:
    moment, shear = np.broadcast_arrays(
        np.asarray(moment, dtype=np.float64), np.asarray(shear, dtype=np.float64)
    )
    shape = shear.shape

    def full(value) -> np.ndarray:
        return np.broadcast_to(np.asarray(value), shape)

    return Demand(
        moment=moment,
        shear=shear,
        critical_shear=full(shear if critical is None else np.asarray(critical, dtype=float)),
        peak_sagging=full(peak_sagging),
        peak_hogging=full(peak_hogging),
        can_sag=full(sag),
        can_hog=full(hog),
    )
