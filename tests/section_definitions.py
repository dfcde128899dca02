"""Section definitions of reinforcement, written into models for tests."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import ifcopenshell
import ifcopenshell.guid


@dataclass(frozen=True)
class Piece:
    """One IfcSectionReinforcementProperties with one IfcReinforcementBarProperties; in mm.

    What is None is left out of the model.
    """

    start: Any = 0.0
    end: Any = 6000.0
    depth: Any = 540.0
    count: Any = 3
    diameter: Any = 25.2
    area: Any = 1500.0
    role: str | None = "MAIN"
    grade: str | None = "400W"
    transverse: float | None = None
    surface: str | None = "TEXTURED"
    profile: tuple[float, float] | None = (300.0, 600.0)


@dataclass(frozen=True)
class Writer:
    """A file and what its units of length and area are worth in mm and mm2."""

    file: Any
    mm: float = 1.0
    mm2: float = 1e6
    owner: Any = None

    def definition(self, *pieces: Piece, name: str | None = None, **named: Any) -> Any:
        """An IfcReinforcementDefinitionProperties that nothing is related to yet."""
        return self.file.create_entity(
            "IfcReinforcementDefinitionProperties",
            GlobalId=ifcopenshell.guid.new(),
            OwnerHistory=self.owner,
            Name=name,
            ReinforcementSectionDefinitions=[self._section(piece) for piece in pieces],
            **named,
        )

    def give(self, elements: Sequence[Any], *pieces: Piece, name: str | None = None) -> Any:
        """A definition of some elements."""
        held = self.definition(*pieces, name=name)
        self.file.create_entity(
            "IfcRelDefinesByProperties",
            GlobalId=ifcopenshell.guid.new(),
            OwnerHistory=self.owner,
            RelatedObjects=list(elements),
            RelatingPropertyDefinition=held,
        )
        return held

    def give_by_type(self, elements: Sequence[Any], *held: Any) -> Any:
        """A type of some elements that holds definitions."""
        create = self.file.create_entity
        kind = create(
            "IfcBeamType", ifcopenshell.guid.new(), self.owner, "Type", HasPropertySets=list(held),
            PredefinedType="BEAM",
        )  # fmt: skip
        create(
            "IfcRelDefinesByType", ifcopenshell.guid.new(), self.owner,
            RelatedObjects=list(elements), RelatingType=kind,
        )  # fmt: skip
        return kind

    def _length(self, value: Any) -> Any:
        return None if value is None else float(value) / self.mm

    def _section(self, piece: Piece) -> Any:
        create = self.file.create_entity
        bars = create(
            "IfcReinforcementBarProperties",
            TotalCrossSectionArea=None if piece.area is None else piece.area / self.mm2,
            SteelGrade=piece.grade,
            BarSurface=piece.surface,
            EffectiveDepth=self._length(piece.depth),
            NominalBarDiameter=self._length(piece.diameter),
            BarCount=piece.count,
        )
        return create(
            "IfcSectionReinforcementProperties",
            self._length(piece.start),
            self._length(piece.end),
            self._length(piece.transverse),
            piece.role,
            self._section_of(piece),
            [bars],
        )

    def _section_of(self, piece: Piece) -> Any:
        if piece.profile is None:
            return None
        sizes = [self._length(size) for size in piece.profile]
        profile = self.file.create_entity("IfcRectangleProfileDef", "AREA", None, None, *sizes)
        return self.file.create_entity("IfcSectionProperties", "UNIFORM", profile)
