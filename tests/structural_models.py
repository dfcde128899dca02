"""Structural analysis models added to models made for tests; lengths in mm, forces in N."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import ifcopenshell.guid

POUND_FORCE = 4.4482216152605
FORCES = {"N": 1.0, "kN": 1000.0, "lbf": POUND_FORCE, "kip": 1000.0 * POUND_FORCE}
Vector = Sequence[float]


class Analysis:
    """An analysis model with members, load cases and actions.

    ``mm`` is the length unit of the file, ``force`` the name of the unit of force; forces per
    length are declared as one by the other unless ``declared`` says otherwise.
    """

    def __init__(
        self, file: Any, mm: float, history: Any = None, force: str = "kN",
        declared: bool = True, placement: Any = None,
    ) -> None:  # fmt: skip
        self.file, self.mm, self.history = file, mm, history
        self.newton = FORCES[force]
        self.old = file.schema == "IFC2X3"
        self.assignment = file.by_type("IfcUnitAssignment")[0]
        self.context = file.by_type("IfcGeometricRepresentationContext")[0]
        units = self._units(force, declared)
        self.assignment.Units = [*self.assignment.Units, *units]
        shared = {} if self.old else {"SharedPlacement": placement}
        self.model = self.root(
            "IfcStructuralAnalysisModel", Name="Frame", PredefinedType="LOADING_3D", **shared
        )
        self.placement = placement if self.old else None
        self.cases: list[Any] = []

    def make(self, kind: str, *values: Any, **named: Any) -> Any:
        return self.file.create_entity(kind, *values, **named)

    def root(self, kind: str, **named: Any) -> Any:
        named.setdefault("GlobalId", ifcopenshell.guid.new())
        return self.make(kind, OwnerHistory=self.history, **named)

    def _units(self, force: str, declared: bool) -> list[Any]:
        newton = self.make("IfcSIUnit", UnitType="FORCEUNIT", Name="NEWTON")
        if force == "kN":
            newton.Prefix = "KILO"
        elif force != "N":
            factor = self.make("IfcMeasureWithUnit", self.make("IfcReal", self.newton), newton)
            powers = self.make("IfcDimensionalExponents", 1, 1, -2, 0, 0, 0, 0)
            newton = self.make("IfcConversionBasedUnit", powers, "FORCEUNIT", force, factor)
        length = next(u for u in self.assignment.Units if u.UnitType == "LENGTHUNIT")
        parts = [
            self.make("IfcDerivedUnitElement", newton, 1),
            self.make("IfcDerivedUnitElement", length, -1),
        ]
        per_length = self.make("IfcDerivedUnit", parts, "LINEARFORCEUNIT")
        parts = [
            self.make("IfcDerivedUnitElement", newton, 1),
            self.make("IfcDerivedUnitElement", length, 1),
        ]
        torque = self.make("IfcDerivedUnit", parts, "TORQUEUNIT")
        return [newton, per_length, torque] if declared else [newton]

    # Geometry -----------------------------------------------------------------------------------

    def point(self, *place: float) -> Any:
        return self.make("IfcCartesianPoint", [float(v) / self.mm for v in place])

    def _topology(self, item: Any, kind: str) -> Any:
        shape = self.make("IfcTopologyRepresentation", self.context, "Reference", kind, [item])
        return self.make("IfcProductDefinitionShape", None, None, [shape])

    def edge(self, start: Vector, end: Vector) -> Any:
        ends = [self.make("IfcVertexPoint", self.point(*place)) for place in (start, end)]
        return self._topology(self.make("IfcEdge", *ends), "Edge")

    def vertex(self, place: Vector) -> Any:
        return self._topology(self.make("IfcVertexPoint", self.point(*place)), "Vertex")

    # Items --------------------------------------------------------------------------------------

    def member(
        self, start: Vector, end: Vector, name: str = "M-1", axis: Vector = (0, 0, 1),
        kind: str = "IfcStructuralCurveMember",
    ) -> Any:  # fmt: skip
        own = {} if self.old else {"Axis": self.make("IfcDirection", [float(v) for v in axis])}
        made = self.root(
            kind, Name=name, ObjectPlacement=self.placement, Representation=self.edge(start, end),
            PredefinedType="RIGID_JOINED_MEMBER", **own,
        )  # fmt: skip
        self.group(self.model, made)
        return made

    def node(self, place: Vector, name: str = "N-1") -> Any:
        made = self.root(
            "IfcStructuralPointConnection", Name=name, ObjectPlacement=self.placement,
            Representation=self.vertex(place),
        )  # fmt: skip
        self.group(self.model, made)
        return made

    def surface(self) -> Any:
        return self.root(
            "IfcStructuralSurfaceMember", Name="Plate", PredefinedType="SHELL", Thickness=0.2
        )

    def tie(self, first: Any, product: Any) -> None:
        self.root("IfcRelAssignsToProduct", RelatedObjects=[first], RelatingProduct=product)

    # Cases --------------------------------------------------------------------------------------

    def case(self, name: str, action: str = "NOTDEFINED", **named: Any) -> Any:
        kind = "IfcStructuralLoadGroup" if self.old else "IfcStructuralLoadCase"
        made = self.root(
            kind, Name=name, PredefinedType="LOAD_CASE", ActionType=action,
            ActionSource="NOTDEFINED", **named,
        )  # fmt: skip
        self.cases.append(made)
        self.model.LoadedBy = self.cases
        return made

    def load_group(self, name: str, kind: str = "LOAD_GROUP", **named: Any) -> Any:
        return self.root(
            "IfcStructuralLoadGroup", Name=name, PredefinedType=kind, ActionType="NOTDEFINED",
            ActionSource="NOTDEFINED", **named,
        )  # fmt: skip

    def group(self, group: Any, *members: Any, factor: float | None = None) -> None:
        by_factor = {} if factor is None else {"Factor": float(factor)}
        kind = "IfcRelAssignsToGroup" + ("" if factor is None else "ByFactor")
        self.root(kind, RelatedObjects=list(members), RelatingGroup=group, **by_factor)

    # Actions ------------------------------------------------------------------------------------

    def linear(self, **components: float) -> Any:
        """A force per length [N/mm] by its components x, y, z; moments mx, my, mz [N]."""
        per_length = self.newton / self.mm
        values = {
            f"LinearForce{axis.upper()}": value / per_length
            for axis, value in components.items()
            if len(axis) == 1
        }
        values |= {
            f"LinearMoment{axis[1].upper()}": value / self.newton
            for axis, value in components.items()
            if len(axis) == 2
        }
        return self.make("IfcStructuralLoadLinearForce", **values)

    def single(self, **components: float) -> Any:
        """A force [N] by its components x, y, z; moments mx, my, mz [N*mm]."""
        torque = self.newton * self.mm
        values = {
            f"Force{axis.upper()}": value / self.newton
            for axis, value in components.items()
            if len(axis) == 1
        }
        values |= {
            f"Moment{axis[1].upper()}": value / torque
            for axis, value in components.items()
            if len(axis) == 2
        }
        return self.make("IfcStructuralLoadSingleForce", **values)

    def configured(self, places: Mapping[float, Any] | Sequence[tuple[float, Any]]) -> Any:
        """Loads at distances along the member [mm]."""
        pairs = list(places.items()) if isinstance(places, Mapping) else list(places)
        return self.make(
            "IfcStructuralLoadConfiguration",
            None,
            [load for _, load in pairs],
            [[place / self.mm] for place, _ in pairs],
        )

    def along(
        self, item: Any, load: Any, *groups: Any, kind: str = "CONST", projected: bool = False,
        local: bool = False, shape: Any = None, name: str = "Line",
    ) -> Any:  # fmt: skip
        own = {} if self.old else {"PredefinedType": kind}
        length = "PROJECTED_LENGTH" if projected else "TRUE_LENGTH"
        entity = "IfcStructuralLinearAction"
        if not self.old and kind != "CONST":
            entity = "IfcStructuralCurveAction"
        return self._acting(
            entity, item, load, groups, local, name, ProjectedOrTrue=length,
            Representation=shape, **own,
        )  # fmt: skip

    def at(
        self, item: Any, load: Any, *groups: Any, shape: Any = None, local: bool = False,
        name: str = "Point",
    ) -> Any:  # fmt: skip
        return self._acting(
            "IfcStructuralPointAction", item, load, groups, local, name, Representation=shape
        )

    def over(self, item: Any, *groups: Any) -> Any:
        load = self.make("IfcStructuralLoadPlanarForce", PlanarForceZ=-1.0)
        own = {} if self.old else {"PredefinedType": "CONST"}
        return self._acting(
            "IfcStructuralPlanarAction", item, load, groups, False, "Area",
            ProjectedOrTrue="TRUE_LENGTH", **own,
        )  # fmt: skip

    def _acting(
        self, entity: str, item: Any, load: Any, groups: Sequence[Any], local: bool, name: str,
        **named: Any,
    ) -> Any:  # fmt: skip
        made = self.root(
            entity, Name=name, AppliedLoad=load, DestabilizingLoad=False,
            GlobalOrLocal="LOCAL_COORDS" if local else "GLOBAL_COORDS", **named,
        )  # fmt: skip
        if item is not None:
            self.root(
                "IfcRelConnectsStructuralActivity", RelatingElement=item,
                RelatedStructuralActivity=made,
            )  # fmt: skip
        for group in groups:
            self.group(group, made)
        return made
