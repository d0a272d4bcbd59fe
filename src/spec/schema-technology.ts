import {
  atLeastZero,
  byKind,
  choice,
  constant,
  described,
  file,
  gradient,
  harmless,
  length,
  lengthOrZero,
  list,
  name,
  object,
  pair,
  position,
  positive,
  stream,
  structureName,
  text,
  truth,
  whole,
  worded,
} from './schema-parts.js';
import type { Schema } from './schema-parts.js';

const layer = object({
  name: described(harmless, 'by which all other keys refer to the layer'),
  'lefName?': described(harmless, 'its name in the abstract'),
  stream: described(stream, 'layer number and datatype in the stream file'),
  kind: described(
    choice('metal', 'plate', 'diffusion', 'implant', 'well', 'outline', 'marker', 'label', 'pin'),
    'metal, plate, diffusion and well conduct; a diffusion joins the well that it overlaps',
  ),
  'of?': described(harmless, 'of a pin or label layer: its metal'),
  'minWidth_um?': described(length, 'least width of a shape; required of metal and plate'),
  'minSpacing_um?': described(length, 'least gap between shapes and within one; required of metal and plate'),
  'wideFrom_um?': described(length, 'a shape is wide where a square of this side fits'),
  'wideSpacing_um?': described(length, 'least gap beside a wide shape'),
  'minArea_um2?': described(positive, 'least area of a shape'),
  'minEnclosedArea_um2?': described(positive, 'least area of a hole'),
  'maxWidth_um?': described(length, 'no square of a larger side may fit into a shape'),
  'sheetResistance_ohm?': described(positive, 'resistance of a square'),
  'thickness_um?': described(length, 'thickness of the layer'),
  'height_um?': described(lengthOrZero, 'its underside above the substrate'),
});

const via = object({
  name: described(harmless, 'name of the via'),
  stream: described(stream, 'layer number and datatype in the stream file'),
  lower: described(harmless, 'layer that it comes from'),
  upper: described(harmless, 'layer that it leads to'),
  size_um: described(length, 'side of the square'),
  spacing_um: described(length, 'least gap between two'),
  enclosure_um: described(lengthOrZero, 'by which both layers surround it on all sides'),
  'resistance_ohm?': described(atLeastZero, 'resistance of one'),
});

const terminal = object({
  layer: described(harmless, 'layer of the terminal'),
  at_um: described(pair(position), 'a place on it'),
});
const terminals = described(
  object({ bottom: described(terminal, 'its bottom terminal'), top: described(terminal, 'its top terminal') }),
  'where the hookup meets the unit: about its middle, of a named cell in its own coordinates',
);
const capacitance_fF = described(positive, 'capacitance of one unit');
const met = {
  'tab_um?': described(
    pair(length),
    'how far the tabs left and right stand out, and how tall they are; required with channels',
  ),
  'tabLevel_um?': described(
    length,
    'the left tab stands this far above the middle, the right one below; required with channels',
  ),
  'strip_um?': described(
    lengthOrZero,
    'height of the landing strip along the lower edge of the bottom terminal; required under plates',
  ),
};

const unit = byKind({
  'parallel-plate': object({
    kind: constant('parallel-plate'),
    topPlate_um: described(pair(length), 'width and height of the top plate'),
    plateEnclosure_um: described(length, 'by which the bottom plate surrounds it'),
    ...met,
    capacitance_fF,
    terminals,
  }),
  'framed-fingers': object({
    kind: constant('framed-fingers'),
    fingers: described(whole(2, 200), 'fingers of the comb within the frame; the frame has one fewer'),
    fingerLength_um: described(length, "length of the comb's fingers above their bar"),
    fingerWidth_um: described(length, 'width of all fingers'),
    gap_um: described(length, 'between comb and frame, all around'),
    frameWidth_um: described(length, "width of the frame's sides"),
    barWidth_um: described(
      length,
      "height of the bar that the comb's fingers stand on; the via to the straps is there",
    ),
    ...met,
    'shield?': described(truth, "with channels: a VSS strip on the trunks' metal under each column of units"),
    capacitance_fF: described(
      positive,
      'capacitance of one unit: what facingCapacitance_fF_per_um gives, within 5 percent',
    ),
    terminals,
  }),
  'named-cell': object({
    kind: constant('named-cell'),
    cell: described(structureName, "name of the cell in the user's own library"),
    outline_um: described(pair(pair(position)), 'lower left and upper right corner of all that is in it'),
    capacitance_fF,
    terminals,
  }),
});

const word = worded('^[A-Za-z][A-Za-z0-9_.]{0,63}$', 'a letter, then letters, digits, _ or ., 64 at most');
const value = worded('^[A-Za-z0-9_.+*/()-]{1,64}$', 'a value without blanks: letters, digits and _ . + - * / ( )');
const device = object({
  model: described(word, 'name of the model or subcircuit'),
  prefix: described(choice('C', 'X'), 'C a capacitor, X a subcircuit'),
  terminals: described(list(word, 2, 8), 'order of the terminals; "top" and "bottom" once each'),
  'bulk?': described(word, 'net of the terminal that is neither'),
  'parameters?': described(
    { type: 'object', additionalProperties: value },
    'size parameters; one that is a size of the unit follows where unit_fF changes it',
  ),
  'multiplicity?': described(word, 'parameter that counts devices in parallel'),
});

const roles = object({
  bottomPlate: described(harmless, "metal of the bottom terminal: bottom plate, frame, or a named cell's landing"),
  topPlate: described(harmless, 'layer of the top terminal: top plate, comb (the same metal as the frame), or landing'),
  trunk: described(harmless, 'vertical wires of the bits'),
  stub: described(
    harmless,
    'horizontal wires from the units to their trunks; under framed fingers the metal of the plate that shields them from trunks',
  ),
  bus: described(harmless, "horizontal wires that join a bit's trunks"),
  strap: described(harmless, 'top-plate wires along the columns'),
  spine: described(harmless, 'wire that joins the straps'),
  marker: described(harmless, 'marks each unit'),
  fillExclusion: described(harmless, 'keeps automatic fill out of the block'),
  'extractionExclusion?': described(
    harmless,
    "what a parasitic extractor leaves out, so that a unit's own capacitance does not count twice; required of framed fingers",
  ),
  boundary: described(harmless, 'outline of the block'),
});

const tieRing = object({
  diffusion: described(harmless, 'its layer; a via leads from it to the trunks, or to the underlay'),
  'implant?': described(harmless, 'an implant around it'),
  'implantEnclosure_um?': described(lengthOrZero, 'by which the implant surrounds the diffusion'),
});
const underlay = object({
  layer: described(harmless, 'a well, diffusion or metal below the trunks'),
  net: described(name, 'VSS, or a net of its own, which then has a pin beside those of the bits'),
  'tie?': described(harmless, 'of a well on a net of its own: the diffusion that joins it to wires'),
});

export const technologySchema: Schema = file('technology', 'Technology template', {
  name: described(harmless, 'name of the template'),
  description: described(text(1000), 'what it is and what it is not'),
  hookup: described(choice('channel', 'under-plate'), 'where the trunks run: between the columns or under the plates'),
  grid_nm: described(whole(1, 1000), 'every corner lies on it'),
  layers: described(list(layer, 1, 200), 'all layers'),
  vias: described(list(via, 1, 100), 'all vias'),
  viaUnderTopPlate: described(truth, 'false: no via between layers below the top plate may overlap it'),
  wiresUnderPlate: described(truth, 'false: no wire but VSS below the bottom plate may overlap it, its tabs aside'),
  dielectric: described(
    object({
      relativePermittivity: described(positive, 'of the insulator around the wires'),
      'plateCapacitance_fF_per_um2?': described(positive, 'between the plates, by area; required of parallel plates'),
      'plateFringe_fF_per_um?': described(atLeastZero, 'along the edges of the top plate'),
      'facingCapacitance_fF_per_um?': described(
        positive,
        "by the length of the comb's edges that face the frame; required of framed fingers",
      ),
    }),
    'what the capacitances come from',
  ),
  unit: described(unit, 'the unit capacitor'),
  mismatch: described(
    object({
      coefficient_percent_um: described(
        atLeastZero,
        'area law: times one over the square root of the area (top plate, frame or outline)',
      ),
      of: described(choice('single', 'pair'), 'of one unit, or of the difference of two'),
      'correlatedSigma_percent?': described(atLeastZero, 'the part of the mismatch that neighbours share'),
      'correlationLength_um?': described(length, 'distance over which it fades'),
    }),
    'random mismatch of units',
  ),
  gradient: described(gradient, 'what to expect across a block'),
  proximityReach_um: described(lengthOrZero, 'how far surroundings change a unit: rings are chosen to cover it'),
  device: described(device, 'the unit as a device of netlists'),
  roles: described(roles, 'which layer does what'),
  'shieldLines?': described(
    truth,
    "true: a VSS line on the straps' metal over each channel, between trunks and straps",
  ),
  'tieRing?': described(tieRing, 'a ring of diffusion below the VSS frame that ties the substrate to VSS'),
  'underlay?': described(underlay, 'a sheet below the whole array'),
});

/** Every key of a template as Markdown: its path, what it is, whether it may be absent. From the schema alone. */
export function technologyMarkdown(): string {
  const rows: string[] = [];
  const visit = (path: string, { properties = {}, required = [], allOf = [] }: Schema, kind = ''): void => {
    for (const [key, schema] of Object.entries(properties)) {
      if (schema.description === undefined) continue;
      const item = schema.items?.properties === undefined ? undefined : schema.items;
      const here = `${path}${key}${item === undefined ? '' : '[]'}`;
      const values = schema.enum === undefined ? '' : `${schema.enum.map((v) => `\`${String(v)}\``).join(', ')}: `;
      const optional = required.includes(key) ? '' : ' (optional)';
      rows.push(`| \`${here}\`${kind} | ${values}${schema.description}${optional} |`);
      visit(`${here}.`, item ?? schema, kind);
    }
    for (const { if: when, then } of allOf) visit(path, then, ` of ${String(when.properties?.kind.const)}`);
  };
  visit('', technologySchema);
  return ['| key | what it is |', '|---|---|', ...rows, ''].join('\n');
}
