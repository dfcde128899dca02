// Prints the result sets of a model as JSON, read by a parser that did not write them:
// {"instances": n, "sets": [{"beam": GlobalId, "express_id": n, "set": name, "guid": GlobalId,
//   "properties": {name: {"type": measure, "value": value, "unit": unit or null}}}]}
// where a unit is {"prefix", "name"}, {"factor", "of": unit} or
// {"elements": [{"exponent", "unit": unit}]}.
import { readFileSync } from "node:fs";
import { IfcAPI, IFCRELDEFINESBYPROPERTIES, LogLevel } from "web-ifc";

const api = new IfcAPI();
await api.Init();
api.SetLogLevel(LogLevel.LOG_LEVEL_OFF);
const model = api.OpenModel(new Uint8Array(readFileSync(process.argv[2])));

const vector = (found) => Array.from({ length: found.size() }, (_, index) => found.get(index));
const line = (reference) => api.GetLine(model, reference.value);

function unit(reference) {
  if (!reference) return null;
  const found = line(reference);
  if (found.Elements) {
    const elements = found.Elements.map(line);
    return {
      elements: elements.map((part) => ({ exponent: part.Exponent.value ?? part.Exponent, unit: unit(part.Unit) })),
    };
  }
  if (found.ConversionFactor) {
    const measure = line(found.ConversionFactor);
    return { factor: measure.ValueComponent.value, of: unit(measure.UnitComponent) };
  }
  return { prefix: found.Prefix ? found.Prefix.value : null, name: found.Name.value };
}

function property(single) {
  const { name: type, value } = single.NominalValue;
  return { type, value: value ?? null, unit: unit(single.Unit) }; // null: the logical .U.
}

function setsOf(relation) {
  const set = line(relation.RelatingPropertyDefinition);
  if (!set.Name || !set.Name.value.startsWith("BeamRating_")) return [];
  const properties = Object.fromEntries(
    set.HasProperties.map(line).map((single) => [single.Name.value, property(single)]),
  );
  return relation.RelatedObjects.map((reference) => ({
    beam: line(reference).GlobalId.value,
    express_id: reference.value,
    set: set.Name.value,
    guid: set.GlobalId.value,
    properties,
  }));
}

const relations = vector(api.GetLineIDsWithType(model, IFCRELDEFINESBYPROPERTIES));
const sets = relations.map((id) => setsOf(api.GetLine(model, id))).flat();
console.log(JSON.stringify({ instances: api.GetAllLines(model).size(), sets }));
api.CloseModel(model);
