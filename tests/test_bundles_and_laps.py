"""Bars in contact, bars that lap, and bars that meet: how they develop and what they give."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from ifccheck.beam import Anchor, Bars
from ifccheck.rating.covers import bonds_of
from ifccheck.rating.subject import Subject
from ifccheck.standards.csa_a23_3_14.development import bundle_factor, development_length
from tests.barred_beams import ModelWithBars, bent, straight
from tests.made_subjects import line, point, rated, subject

LOADS = (line("floor", 14.0), point("press", 60e3, 3000.0))


def with_bars(*bars: Bars, loads: Sequence[Any] = LOADS) -> Subject:
    one = subject(loads=loads)
    return replace(one, bars=bars, bar_yield=(one.bar_yield[0],) * len(bars))


def layer(start: float, end: float, *ys: float, z: float = 60.0) -> Bars:
    """25M bars with straight ends."""
    return Bars(len(ys), 25.2, 500.0, start, end, z, ys)


def sagging(one: Subject) -> float:
    _, (found,) = rated(one)
    return next(s.utilisation for s in found.limit_states if s.name == "FlexureSagging")


def bonds(*bars: Bars) -> list[tuple[float, int, bool]]:
    found = bonds_of([with_bars(*bars)])
    columns = (found.cover_distance, found.bundle, found.lapped)
    return list(zip(*(column.tolist() for column in columns), strict=True))


def test_bars_in_contact_are_a_bundle_and_stand_from_the_next_by_its_distance() -> None:
    """Two thirds of the distance to the nearest bar of none of its bundle, 100 mm."""
    pair = layer(0, 6000, -12.6, 12.6, 112.6)
    assert bonds(pair) == [(pytest.approx(37.4), 2, False)]  # the side of the beam at 150 mm
    pair = layer(0, 6000, -62.6, -37.4, 62.6)
    assert bonds(pair) == [(60.0, 2, False)]
    three = layer(0, 6000, -25.2, 0.0, 25.2)
    assert bonds(three)[0][1] == 3
    assert bonds(layer(0, 6000, 0.0), layer(0, 6000, 0.0, z=85.2))[0][1] == 2
    assert bonds(layer(0, 6000, -30.0, 30.0)) == [(40.0, 1, False)]


@pytest.mark.parametrize(("bars", "factor"), [(1, 1.0), (2, 1.1), (3, 1.2), (4, 1.33)])
def test_bars_of_a_bundle_develop_over_a_longer_length(bars: int, factor: float) -> None:
    """CSA A23.3-14, 12.4.1, from memory; cover told in diameters of one bar of equal area."""
    assert float(bundle_factor(np.array(bars))) == factor
    ys = tuple(25.2 * (k - (bars - 1) / 2.0) for k in range(bars))
    ((cover, count, _),) = bonds(layer(0, 6000, *ys))
    assert (cover, count) == (60.0, bars)
    length = development_length(
        diameter=np.array(25.2),
        steel_yield=np.array(400.0),
        concrete_strength=np.array(30.0),
        cover_distance=np.array(cover / bars**0.5),
        top_bar=np.array(False),
        density_factor=np.array(1.0),
        bar_area=np.array(500.0),
    )
    least = 1.15 * 400.0 / 30.0**0.5 * 500.0 / min(60.0 / bars**0.5, 63.0)
    assert float(length) == pytest.approx(least)


def test_bundling_never_strengthens() -> None:
    """Bars too short to develop beside the load, beside two that run through."""
    through = replace(layer(0, 6000, -110.0, 110.0, z=120.0), area=1000.0)
    through = anchored(through, True, True)
    load = (point("press", 60e3, 3000.0),)
    apart, pairs, two = (
        sagging(with_bars(through, layer(1900, 4100, *ys), loads=load))
        for ys in ((-75.0, -25.0, 25.0, 75.0), (-62.6, -37.4, 37.4, 62.6), (-60.0, 60.0))
    )
    assert apart <= pairs <= two


def lap(length: float, apart: float) -> tuple[Bars, Bars]:
    half = length / 2.0
    one = layer(0.0, 3000.0 + half, -75.0, 25.0)
    return one, layer(3000.0 - half, 6000.0, -75.0 + apart, 25.0 + apart)


@pytest.mark.parametrize("apart", [25.2, 40.0])
def test_two_bars_that_lap_give_no_more_than_one_up_to_a_lap_of_class_b(apart: float) -> None:
    """Each develops from its own end; 1.3 times the length in all (12.15.1)."""
    (cover, bundle, lapped), _ = bonds(*lap(900.0, apart))
    assert lapped
    assert bundle == (2 if apart == 25.2 else 1)
    whole = anchored(layer(0, 6000, -75.0, 25.0), True, True)
    factor = 1.1 if bundle == 2 else 1.0
    length = 1.15 * 400.0 / 30.0**0.5 * 500.0 / min(cover / bundle**0.5, 63.0)
    class_b = 1.3 * factor * max(length, 300.0)
    for part in (0.5, 0.8, 0.999):
        one = with_bars(replace(whole, area=500.0 * part))
        assert sagging(lapping(part * class_b, apart)) == pytest.approx(sagging(one), rel=1e-6)
    assert sagging(lapping(2.5 * class_b, apart)) < sagging(with_bars(whole))


def anchored(bars: Bars, start: bool, end: bool) -> Bars:
    first, last = (Anchor.ANCHORED if each else Anchor.STRAIGHT for each in (start, end))
    return replace(bars, start_anchor=first, end_anchor=last)


def lapping(length: float, apart: float) -> Subject:
    one, other = lap(length, apart)
    return with_bars(anchored(one, True, False), anchored(other, False, True))


def test_bars_far_apart_or_cut_off_together_do_not_lap() -> None:
    assert not bonds(layer(0, 3500, -100.0), layer(2500, 6000, 100.0))[0][2]
    assert not bonds(layer(0, 6000, -60.0), layer(1500, 4500, 0.0))[0][2]
    assert not bonds(layer(0, 5900, -60.0), layer(100, 6000, 0.0))[0][2]


# What is read


def read(*shapes: Any, coupler: str = "", **attributes: Any) -> Any:
    """A beam with bars, and what is said to be a coupler round the middle of it."""
    model = ModelWithBars()
    beam = model.beam(origin=(1000.0, 2000.0, 3000.0), along=(0.0, 1.0, 0.0))
    model.bars(beam, *shapes, diameter=25.0)
    if coupler:
        add_coupler(model, beam, coupler, **attributes)
    return model.read(beam)


def add_coupler(model: ModelWithBars, beam: Any, kind: str, **attributes: Any) -> None:
    create = model.file.create_entity
    profile = create("IfcCircleProfileDef", "AREA", None, None, 25.0)
    along, across = model.direction((1, 0, 0)), model.direction((0, 1, 0))
    axes = create("IfcAxis2Placement3D", model.point((2950.0, 0.0, 60.0)), along, across)
    up = model.direction((0, 0, 1))
    solid = create("IfcExtrudedAreaSolid", profile, axes, up, 100.0)
    model.bar([solid], None, beam, kind=kind, **attributes)


HALVES = (straight(40, 3000, 0, 60), straight(3004, 5960, 0, 60))


def test_bars_that_meet_both_end_where_no_coupler_is() -> None:
    found = read(*HALVES)
    assert [(b.start, b.end, b.start_beyond, b.end_beyond) for b in found.bars] == [
        (40.0, pytest.approx(3000.0), 0.0, 0.0),
        (pytest.approx(3004.0), 5960.0, 0.0, 0.0),
    ]
    assert "no coupler is found there" in found.remarks


@pytest.mark.parametrize(
    ("kind", "attributes", "holds"),
    [
        ("IfcMechanicalFastener", {}, True),
        ("IfcMechanicalFastener", {"PredefinedType": "BOLT"}, False),
        ("IfcFastener", {"PredefinedType": "GLUE"}, False),
        ("IfcBuildingElementProxy", {"Name": "Coupler 25M"}, True),
        ("IfcMechanicalFastener", {"Name": "Bolt M20"}, False),
        ("IfcMechanicalFastener", {"ObjectType": "Anchor bolts"}, False),
        ("IfcBuildingElementProxy", {"Name": "Box"}, False),
        ("IfcDiscreteAccessory", {"ObjectType": "Schraubmuffe"}, True),
    ],
)
def test_a_coupler_makes_one_bar_of_two(kind: str, attributes: dict[str, Any], holds: bool) -> None:
    found = read(*HALVES, coupler=kind, **attributes)
    assert ("meet in a coupler" in found.remarks) is holds
    first, second = found.bars
    assert (first.end == second.start) is holds
    assert first.end_beyond == pytest.approx(2958.0 if holds else 0.0, abs=0.1)
    assert second.start_beyond == pytest.approx(2962.0 if holds else 0.0, abs=0.1)


def test_a_coupler_elsewhere_joins_nothing() -> None:
    elsewhere = straight(40, 2500, 0, 60), straight(2504, 5960, 0, 60)
    assert "no coupler" in read(*elsewhere, coupler="IfcMechanicalFastener").remarks


def test_a_coupled_bar_that_is_weaker_gives_the_other_nothing() -> None:
    model = ModelWithBars()
    beam = model.beam()
    model.bars(beam, HALVES[0], diameter=25.0)
    model.bars(beam, HALVES[1], diameter=16.0)
    add_coupler(model, beam, "IfcMechanicalFastener")
    thick, thin = sorted(model.read(beam).bars, key=lambda b: -b.diameter)
    assert thick.end_beyond == 0.0
    assert thin.start_beyond == pytest.approx(2962.0, abs=0.1)


@pytest.mark.parametrize(("count", "fits"), [(4, True), (5, False)])
def test_more_bars_in_contact_than_a_bundle_may_have_are_a_reason(count: int, fits: bool) -> None:
    places = [(0, 60), (25, 60), (0, 85), (25, 85), (50, 60)][:count]
    found = read(*(straight(40, 5960, y, z) for y, z in places))
    assert ("more than a bundle may have" in found.reasons) is not fits


def test_bars_that_only_cross_in_contact_are_no_bundle() -> None:
    crank = bent([(40, -100, 60), (2900, -100, 60), (3100, 100, 60), (5960, 100, 60)], 60.0)
    found = read(crank, *(straight(40, 5960, y, 85) for y in (-60, -20, 20, 60)))
    assert "bundle" not in found.reasons
