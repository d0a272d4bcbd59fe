import type { Conductors } from './conductors.js';
import { meetingPlace } from './cut.js';
import type { Drawing } from './drawing.js';
import type { Finding } from './finding.js';
import { placeUm } from './finding.js';
import { JointFinder, membersOf } from './joint.js';
import type { PinLabel } from './nets.js';
import { ground } from './nets.js';
import type { Unit } from './unit-recognition.js';
import { meantNets } from './units.js';

interface Named {
  readonly c: Conductors;
  readonly labels: readonly PinLabel[];
  /** Names by piece. */
  readonly names: ReadonlyMap<number, readonly string[]>;
  readonly units: readonly Unit[];
}

/** Nodes that are meant to be on a net: those under its labels, and the plates of units whose cells say so. */
function sourcesOf(drawing: Drawing, { labels, units }: Named): ReadonlyMap<string, ReadonlySet<number>> {
  const sources = new Map<string, Set<number>>();
  const add = (net: string, node: number) => {
    const known = sources.get(net);
    if (known) known.add(node);
    else sources.set(net, new Set([node]));
  };
  for (const label of labels) add(label.name, label.node);
  for (const unit of units) {
    const name = unit.cell >= 0 ? drawing.flat.cells[unit.cell].name : undefined;
    if (name === undefined) continue;
    const meant = meantNets(name);
    for (const node of unit.bottom) add(meant.bottom, node);
    for (const node of unit.top) add(meant.top, node);
  }
  return sources;
}

function shorts(named: Named, sources: ReadonlyMap<string, ReadonlySet<number>>): Finding[] {
  const { c, labels, names } = named;
  const findings: Finding[] = [];
  for (const [piece, nets] of names) {
    if (nets.length < 2) continue;
    const here = (net: string) => [...(sources.get(net) ?? [])].filter((node) => c.piece[node] === piece);
    // Of two nets one search finds where they meet; of more, each is parted from all others.
    for (const net of nets.length === 2 ? [nets[0]] : nets) {
      const others = new Set(nets.filter((other) => other !== net).flatMap(here));
      const label = labels.find((l) => l.name === net && c.piece[l.node] === piece)!;
      const [x, y] = meetingPlace(c, new Set(here(net)), others) ?? [label.x, label.y];
      const text = `${nets.join(', ')} are one piece`;
      findings.push({ rule: 'short', layer: layerAt(c, label.node), at_um: placeUm(x, y), nets, text });
    }
  }
  return findings;
}

const layerAt = (c: Conductors, node: number): string => (c.layerOf[node] < 0 ? '' : c.layers[c.layerOf[node]].name);

/** Names on several pieces, pieces without a name, and names without a unit. */
function opens(drawing: Drawing, named: Named, sources: ReadonlyMap<string, ReadonlySet<number>>): Finding[] {
  const { c, labels, names, units } = named;
  const underlay = drawing.technology.underlay?.net;
  const members = membersOf(c);
  const finder = new JointFinder(c, drawing);
  const withUnits = new Set(units.flatMap((unit) => [...unit.bottom, ...unit.top].map((node) => c.piece[node])));

  // What an unnamed piece is meant to be: the net of most of its plates.
  const votes = new Map<number, Map<string, number>>();
  for (const [net, nodes] of sources)
    for (const node of nodes) {
      const piece = c.piece[node];
      if (names.has(piece)) continue;
      const own = votes.get(piece) ?? new Map<string, number>();
      votes.set(piece, own.set(net, (own.get(net) ?? 0) + 1));
    }
  const meant = new Map<number, string>();
  for (const [piece, own] of votes)
    meant.set(piece, [...own].sort((a, b) => b[1] - a[1] || (a[0] < b[0] ? -1 : 1))[0][0]);
  const isOn = (net: string) => (piece: number) =>
    meant.get(piece) === net || (names.get(piece)?.includes(net) ?? false);

  const place = (piece: number, net: string | undefined): [number, number] => {
    const nodes = members[piece];
    const joint =
      finder.find(nodes, isOn(net ?? ground)) ??
      (net === undefined ? finder.find(nodes, (p) => names.has(p)) : undefined);
    if (joint) return placeUm(joint.x, joint.y);
    const { x0, y0, x1, y1 } = c.box;
    return placeUm((x0[nodes[0]] + x1[nodes[0]]) / 2, (y0[nodes[0]] + y1[nodes[0]]) / 2);
  };

  const findings: Finding[] = [];
  const cutOff = new Set<number>();
  const piecesOf = new Map<string, number[]>();
  for (const [piece, nets] of names) for (const net of nets) piecesOf.set(net, [...(piecesOf.get(net) ?? []), piece]);
  for (const [net, pieces] of piecesOf) {
    // The largest is the net, the others have come off it.
    const [, ...rest] = pieces.sort((a, b) => members[b].length - members[a].length || a - b);
    for (const piece of rest) {
      cutOff.add(piece);
      const text = `${net} is in ${pieces.length} pieces`;
      findings.push({
        rule: 'open',
        layer: layerAt(c, members[piece][0]),
        at_um: place(piece, net),
        nets: [net],
        text,
      });
    }
  }
  for (let piece = 0; piece < c.pieces; piece++) {
    if (names.has(piece) || members[piece].every((node) => c.layerOf[node] < 0)) continue;
    const net = meant.get(piece);
    const common = { layer: layerAt(c, members[piece][0]), at_um: place(piece, net), ...(net ? { nets: [net] } : {}) };
    findings.push({ rule: 'floating', ...common, text: 'piece on no named net' });
    if (net) findings.push({ rule: 'open', ...common, text: `plates meant to be on ${net} are not joined to it` });
  }
  for (const [piece, nets] of names) {
    if (withUnits.has(piece) || cutOff.has(piece) || nets.includes(ground) || nets.includes(underlay ?? ground))
      continue;
    const label = labels.find((l) => c.piece[l.node] === piece)!;
    const joint = finder.find(members[piece], isOn(label.name)) ?? label;
    const at_um = placeUm(joint.x, joint.y);
    const text = `no unit on the piece that is labelled ${nets.join(', ')}`;
    findings.push({ rule: 'open', layer: layerAt(c, label.node), at_um, nets, text });
  }
  return findings;
}

/** Nets as they are drawn: labels name pieces, a piece has one name, a name one piece, and none is without a unit. */
export function checkConnectivity(drawing: Drawing, named: Named): Finding[] {
  const sources = sourcesOf(drawing, named);
  return [...shorts(named, sources), ...opens(drawing, named, sources)];
}
