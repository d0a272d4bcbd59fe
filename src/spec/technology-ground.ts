import { real, record, word } from './loose.js';
import type { Drawn, Examination } from './technology-examination.js';
import { either, quoted, shown } from './words.js';

/** Shield lines, tie ring and underlay: layers of the right kinds, below the trunks, with vias that lead up to them. */
export function checkGround(examination: Examination): void {
  const { technology, report, at } = examination;
  if (technology.shieldLines === true && technology.hookup === 'under-plate')
    report.add(`${at}/shieldLines`, 'true', 'it left out: without channels there is nothing to shield');
  const ring = technology.tieRing === undefined ? undefined : record(technology.tieRing);
  const underlay = technology.underlay === undefined ? undefined : record(technology.underlay);
  if (ring) checkRing(examination, ring, underlay);
  if (underlay) checkUnderlay(examination, underlay, ring);
}

type Loose = Readonly<Record<string, unknown>>;

/** A layer that is named at a place, if it is of one of the kinds and below the trunks. */
function layerOfKind(
  examination: Examination,
  pointer: string,
  given: unknown,
  kinds: readonly string[],
): Drawn | undefined {
  const { report } = examination;
  examination.known(pointer, given);
  const layer = examination.layer(given);
  if (layer === undefined) return undefined;
  const kind = word(layer.entry.kind) ?? '';
  if (!kinds.includes(kind)) {
    report.add(pointer, `a layer of kind ${quoted(kind)}`, `a layer of kind ${either(kinds)}`);
    return undefined;
  }
  const [height, trunk] = [real(layer.entry.height_um), real(examination.role('trunk')?.entry.height_um)];
  if (kind === 'implant' || height === undefined || trunk === undefined || height < trunk) return layer;
  report.add(pointer, `${shown(given)} at a height of ${height} um`, `it below the trunks at ${trunk} um`);
  return undefined;
}

function checkRing(examination: Examination, ring: Loose, underlay: Loose | undefined): void {
  const { report, at } = examination;
  const here = `${at}/tieRing`;
  if (ring.implant !== undefined) layerOfKind(examination, `${here}/implant`, ring.implant, ['implant']);
  else if (ring.implantEnclosure_um !== undefined)
    report.add(`${here}/implantEnclosure_um`, '"implantEnclosure_um" without "implant"', 'both or neither', 'key');
  const diffusion = layerOfKind(examination, `${here}/diffusion`, ring.diffusion, ['diffusion']);
  const ways = [examination.role('trunk'), examination.layer(underlay?.layer)];
  if (diffusion && !ways.some((way) => way && examination.via(diffusion, way)))
    report.add(
      `${at}/vias`,
      `no via from ${quoted(diffusion.name)}`,
      'one to the layer of the trunks or to the underlay',
    );
}

function checkUnderlay(examination: Examination, underlay: Loose, ring: Loose | undefined): void {
  const { report, at } = examination;
  const here = `${at}/underlay`;
  const layer = layerOfKind(examination, `${here}/layer`, underlay.layer, ['well', 'diffusion', 'metal', 'plate']);
  const trunk = examination.role('trunk');
  const isWell = layer?.entry.kind === 'well';
  const ground = underlay.net === 'VSS';
  if (!ground && /^(VSS|TOP|TERM|B\d+)(_[PN])?$/i.test(word(underlay.net) ?? ''))
    report.add(`${here}/net`, shown(underlay.net), '"VSS", or a name that is none of the array\'s nets');
  if (
    !ground &&
    layer &&
    !isWell &&
    layer.entry.kind !== 'diffusion' &&
    examination.technology.wiresUnderPlate === false
  )
    report.add(`${here}/net`, shown(underlay.net), '"VSS": wiresUnderPlate lets no other wire be below the plates');
  if (!ground && ring !== undefined)
    report.add(`${here}/net`, `${shown(underlay.net)} beside a tie ring`, '"VSS", as the ring below the same frame is');
  if (underlay.tie === undefined) {
    const wanted = ground
      ? '"tieRing", whose diffusion joins it to VSS'
      : '"tie": the diffusion that joins it to wires';
    if (isWell && !(ground && ring !== undefined)) report.add(here, 'a well that nothing joins to a wire', wanted);
  } else if (ground || (layer !== undefined && !isWell))
    report.add(`${here}/tie`, shown(underlay.tie), 'it only of a well on a net of its own', 'key');
  else {
    const tie = layerOfKind(examination, `${here}/tie`, underlay.tie, ['diffusion']);
    if (tie && trunk && !examination.via(tie, trunk))
      report.add(
        `${at}/vias`,
        `no via between ${quoted(tie.name)} and ${quoted(trunk.name)}`,
        'one: the underlay is tied by it',
      );
  }
  if (layer && !isWell && trunk && !examination.via(layer, trunk))
    report.add(
      `${at}/vias`,
      `no via between ${quoted(layer.name)} and ${quoted(trunk.name)}`,
      'one: the underlay is tied by it',
    );
}
