"""Members and relationships read many at once from the file's text are those read one by one.

The referee is the reader that goes through ifcopenshell's entities. Each model is written anew as
several programs write: with blanks after commas, wrapped lines, other spellings of numbers, ids out
of order.
"""

from __future__ import annotations

import random
import re
from pathlib import Path
from typing import Any

import ifcopenshell
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ifccheck.ifc.bodies import body_items, extrusion
from ifccheck.ifc.context import Context, make_context
from ifccheck.ifc.lexer import scan
from ifccheck.ifc.members import members_of
from ifccheck.ifc.opening import open_model
from ifccheck.ifc.plain_bodies import PlainBodies
from ifccheck.ifc.products import Product, read_products
from ifccheck.ifc.profiles import Profiles
from ifccheck.ifc.reader import read_model
from ifccheck.ifc.relations import read_relations
from ifccheck.ifc.step_table import StepTable, make_step_table
from tests.ifc_models import Building, Opened
from tests.test_ifc_bars_in_bulk import STYLES as BAR_STYLES
from tests.test_ifc_bars_in_bulk import as_written
from tests.test_ifc_reader import FILES

SAMPLE = Path(__file__).resolve().parents[1] / "sample_models" / "print_works.ifc"
NAMES = (
    "B-1", "RC beam 300x500", "a, (b); c", "", " B 2 ", "W12x26", "Fundamentbalken", "#7",
    "LC30/33 beam", "Spannbetonbinder", "bearing pad", None,
)  # fmt: skip
ODD_NAMES = ("Stahlträger", "it's", "\\x\\", "ü")
"""Names that are spelt with escapes in the file."""
MATERIALS = ("Concrete C30/37", "C35/45", "Steel S355", "", "Baustahl", "GL24h", "X", "300 psi")
STYLES = (*BAR_STYLES, "half hidden")
GENERAL = "Pset_ConcreteElementGeneral"


def table_of(text: str) -> StepTable:
    data = text.encode()
    table = make_step_table(data, scan(data))
    assert table is not None
    return table


def spelt(building: Building, rng: random.Random, style: str) -> str:
    """The model as another program writes it; "half hidden": with comments in half of the instances
    of a few classes, so that plain ones and others stand beside each other."""
    text = as_written(building.file.to_string(), rng, style)
    if style != "half hidden":
        return text
    classes = sorted(set(re.findall(r"^#\d+=(\w+)", text, flags=re.M)))
    hidden = "|".join(rng.sample(classes, 4))
    half = rf"^#\d+=(?=(?:{hidden})\b)"
    return re.sub(half, lambda match: match[0] + rng.choice(("", "/* x */")), text, flags=re.M)


def random_building(schema: str, unit: str, rng: random.Random) -> Building:
    """Members of many kinds, most of them plain, tied together in many ways."""
    building = Building(schema, unit)
    profiles = [building.rectangle(300, 500), *_profiles(building)]
    parent = building.placement(at=(1234.5, -20.0, 3000.0), x=(1.0, 0.25, 0.0))
    products = [
        building.member(
            _class(rng),
            *_items(building, profiles, rng),
            placement=_placement(building, parent, rng),
            Name=rng.choice(NAMES if rng.random() < 0.8 else ODD_NAMES),
            ObjectType=rng.choice(NAMES),
            Tag=rng.choice(NAMES if rng.random() < 0.9 else ODD_NAMES),
        )
        for _ in range(rng.randint(6, 14))
    ]
    _relate(building, products, rng)
    building.open()
    return building


def _class(rng: random.Random) -> str:
    others = ("IfcColumn", "IfcWall", "IfcSlab", "IfcFooting", "IfcMember", "IfcElementAssembly")
    return rng.choice(others) if rng.random() < 0.4 else "IfcBeam"


def _profiles(building: Building) -> list[Any]:
    turned = building.rectangle(200, 600, Position=building.axes_2d((10.0, -5.0), (0.6, 0.8)))
    tee = building.outline(
        (-400, 500), (-400, 400), (-150, 400), (-150, 0), (150, 0), (150, 400), (400, 400),
        (400, 500),
    )  # fmt: skip
    bent = building.outline((0, 0), (4000, 0), (4000, 300), (300, 300), (300, 2000), (0, 2000))
    mitred = building.outline((0, 0), (6000, 0), (5700, 500), (300, 500))
    return [
        turned, tee, bent, mitred, building.outline((0, 0), (300, 300), (300, 0), (0, 300)),
        building.profile("IfcCircleProfileDef", Radius=250.0),
        building.rectangle(300, 500),
    ]  # fmt: skip


def _items(building: Building, profiles: list[Any], rng: random.Random) -> list[Any]:
    solid = building.extrusion(
        rng.choice(profiles),
        rng.choice((6000.0, 6000.0, 2500.25, 400.0)),
        direction=rng.choice(((0, 0, 1), (0, 0, 1), (0, 0, -1), (0.1, 0, 1), (0, 0, 2.5))),
        at=rng.choice(((0, 0, 0), (0, 0, 0), (12.5, 0, -3))),
        z=rng.choice((None, (1, 0, 0), (1, 0, 0), (0, 1, 0.1))),
        x=rng.choice((None, (0, 1, 0))),
    )
    kind = rng.random()
    if kind < 0.7:
        return [solid]
    if kind < 0.8:
        return [building.mapped(solid)]
    if kind < 0.9:
        return [building.clipped(solid, building.half_space((5000, 0, 0), (1, 0, 0.2)))]
    return [] if kind < 0.95 else [solid, solid]


def _placement(building: Building, parent: Any, rng: random.Random) -> Any:
    at = (rng.choice((0.0, 1e-3, 2500.0)), rng.uniform(-1e4, 1e4), rng.choice((0.0, -250.0)))
    z, x = rng.choice(((None, None), ((0, 0, 1), (0, 1, 0)), ((1, 0, 0), (0, 1, 0)),
                       ((0, 0.2, 1), None), (None, (0.6, 0.8, 0))))  # fmt: skip
    return building.placement(at=at, z=z, x=x, within=rng.choice((None, parent, parent)))


def _relate(building: Building, products: list[Any], rng: random.Random) -> None:
    for product in products:
        for name in rng.sample(MATERIALS, rng.choice((0, 1, 1, 1, 2))):
            building.give_material(product, building.entity("IfcMaterial", name))
        if rng.random() < 0.5:
            building.give_set(product, GENERAL, **_values(building, rng))
        if rng.random() < 0.3:
            building.give_set(product, "Made up", Material=building.entity("IfcLabel", "Steel"))
    building.give_type(products[0], Name="RC beam", GlobalId=ifcopenshell.guid.new())
    building.give_type(products[0], Name="Steel beam", GlobalId=ifcopenshell.guid.new())
    building.give_parts(products[0], *products[1:3])
    building.give_parts(products[3], products[2])
    building.root("IfcRelNests", RelatingObject=products[3], RelatedObjects=products[4:5])
    opening = building.root("IfcOpeningElement", ObjectPlacement=building.placement())
    building.root(
        "IfcRelVoidsElement", RelatingBuildingElement=products[5], RelatedOpeningElement=opening
    )


def _values(building: Building, rng: random.Random) -> dict[str, Any]:
    strength = rng.choice(("C30/37", "30", "", "unknown", "it's"))
    cover = rng.choice((35.0, 0.0, 5000.0)) / building.mm
    pairs = {
        "StrengthClass": building.entity("IfcLabel", strength),
        "ConcreteCover": building.entity("IfcPositiveLengthMeasure", cover),
        "ConcreteCoverAtLinks": building.entity("IfcReal", 30.0),
        "CompressiveStrength": building.entity("IfcPressureMeasure", rng.choice((25.0, 3e7))),
        "LoadBearing": building.entity("IfcBoolean", True),
        "Counted": building.entity("IfcInteger", 4),
        "Empty": None,
    }
    return {name: value for name, value in pairs.items() if rng.random() < 0.7}


@pytest.mark.parametrize("style", STYLES)
@pytest.mark.parametrize(
    ("unit", "schema"), [("MILLIMETRE", "IFC4"), ("METRE", "IFC2X3"), ("INCH", "IFC4X3")]
)
@given(seed=st.integers(0, 10**6))
@settings(max_examples=8, deadline=None)
def test_models_in_bulk_are_those_read_one_by_one(
    unit: str, schema: str, style: str, seed: int
) -> None:
    rng = random.Random(seed)
    building = random_building(schema, unit, rng)
    text = spelt(building, rng, style)
    file = ifcopenshell.file.from_string(text)
    opened, table = Opened(file, schema), table_of(text)
    assert read_model(opened, {}, table) == read_model(opened, {})
    assert read_relations(file, table) == read_relations(file)


@pytest.mark.parametrize("style", STYLES)
@given(seed=st.integers(0, 10**6))
@settings(max_examples=8, deadline=None)
def test_bodies_in_bulk_are_the_same_to_the_last_bit(style: str, seed: int) -> None:
    rng = random.Random(seed)
    text = spelt(random_building("IFC4", "INCH", rng), rng, style)
    file = ifcopenshell.file.from_string(text)
    found, bodies, products = plain_bodies(file, table_of(text))
    context = make_context(file, "IFC4")
    profiles = Profiles(context.placements)
    for product in products:
        if product.step_id not in bodies:
            continue
        entity = file.by_id(product.step_id)
        (placed,) = body_items(context, entity)
        expected = extrusion(context, profiles, placed)
        prism, placement = bodies.of(product.step_id)
        assert np.array_equal(prism.matrix, expected.matrix)
        assert prism.along == expected.along
        assert all(map(np.array_equal, prism.profile.rings, expected.profile.rings))
        assert np.array_equal(placement, context.placements.matrix(entity))
        assert np.array_equal(placement, found.placements.matrix(entity))  # it has learnt it


def plain_bodies(file: Any, table: StepTable) -> tuple[Context, PlainBodies, list[Product]]:
    context = make_context(file, str(file.schema), table)
    products = read_products(context, members_of(file))
    return context, PlainBodies(context, Profiles(context.placements), products), products


@pytest.mark.parametrize("style", ["as it is", "spaced", "wrapped", "numbers", "out of order"])
def test_most_members_are_read_in_bulk(style: str) -> None:
    """Else the tests above would compare the thorough reader with itself."""
    rng = random.Random(1)
    buildings = [random_building("IFC4", "METRE", rng) for _ in range(10)]
    plain = told = members = 0
    for building in buildings:
        text = spelt(building, rng, style)
        file = ifcopenshell.file.from_string(text)
        _, bodies, products = plain_bodies(file, table_of(text))
        members += len(products)
        told += sum(product.placement > 0 for product in products)
        plain += sum(product.step_id in bodies for product in products)
    assert told > members / 2
    assert plain > members / 3


@pytest.mark.parametrize("hidden", ["IFCPROPERTYSINGLEVALUE", "IFCRECTANGLEPROFILEDEF"])
def test_what_is_hidden_is_not_taken_for_the_same(hidden: str) -> None:
    building = Building()
    for depth, strength in ((500.0, "C25/30"), (700.0, "C40/50")):
        solid = building.extrusion(building.rectangle(300.0, depth), 6000.0, z=(1, 0, 0))
        value = building.entity("IfcLabel", strength)
        building.give_set(building.beam(solid), GENERAL, StrengthClass=value)
    building.open()
    text = building.file.to_string().replace(f"={hidden}", f"=/* x */{hidden}")
    opened = Opened(ifcopenshell.file.from_string(text), "IFC4")
    model = read_model(opened, {}, table_of(text))
    assert model == read_model(opened, {})
    one, other = model.beams
    assert one.concrete_strength != other.concrete_strength
    assert one.runs != other.runs


@pytest.mark.parametrize("name", FILES)
def test_open_models_in_bulk_are_those_read_one_by_one(name: str, open_models: Path) -> None:
    assert_same_model(open_models / name)


def test_sample_in_bulk_is_that_read_one_by_one() -> None:
    assert_same_model(SAMPLE)


def assert_same_model(path: Path) -> None:
    opened = open_model(path)
    table = make_step_table(opened.source, opened.scan)
    assert table is not None
    assert read_model(opened, {}, table) == read_model(opened, {})
    assert read_relations(opened.file, table) == read_relations(opened.file)


@pytest.mark.parametrize("style", ["as it is", "spaced", "wrapped", "out of order"])
def test_relations_are_read_from_their_text(style: str) -> None:
    """Else the tests above would compare the thorough reader with itself."""
    rng = random.Random(3)
    text = spelt(random_building("IFC4", "MILLIMETRE", rng), rng, style)
    asked: list[int] = []

    class Watched:
        def __init__(self, file: Any) -> None:
            self.by_type = file.by_type
            self._file = file

        def by_id(self, step_id: int) -> Any:
            asked.append(step_id)
            return self._file.by_id(step_id)

    file = Watched(ifcopenshell.file.from_string(text))
    read_relations(file, table_of(text))
    assert not asked
    read_relations(file)
    assert asked
