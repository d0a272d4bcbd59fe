/** Types of a technology template. Lengths in micrometres as in the file; keys are the file's. */

type LayerKind = 'metal' | 'plate' | 'diffusion' | 'implant' | 'well' | 'outline' | 'marker' | 'label' | 'pin';

export interface Stream {
  readonly layer: number;
  readonly datatype: number;
}

export interface Layer {
  readonly name: string;
  readonly lefName?: string;
  readonly stream: Stream;
  readonly kind: LayerKind;
  /** The metal that a pin or label layer belongs to. */
  readonly of?: string;
  readonly minWidth_um?: number;
  readonly minSpacing_um?: number;
  readonly wideFrom_um?: number;
  readonly wideSpacing_um?: number;
  readonly minArea_um2?: number;
  readonly minEnclosedArea_um2?: number;
  readonly maxWidth_um?: number;
  readonly sheetResistance_ohm?: number;
  readonly thickness_um?: number;
  /** Height of the underside above the substrate. */
  readonly height_um?: number;
}

export interface Via {
  readonly name: string;
  readonly stream: Stream;
  readonly lower: string;
  readonly upper: string;
  readonly size_um: number;
  readonly spacing_um: number;
  /** On all sides, in both layers. */
  readonly enclosure_um: number;
  readonly resistance_ohm?: number;
}

interface Terminal {
  readonly layer: string;
  readonly at_um: readonly [number, number];
}

interface AnyUnit {
  readonly capacitance_fF: number;
  /** In the unit's coordinates: about its middle, or those of the named cell. */
  readonly terminals: { readonly bottom: Terminal; readonly top: Terminal };
}

/** Where the hookup meets what is drawn: in the channel style at tabs, under plates at a strip along the lower edge. */
interface Met {
  readonly tab_um?: readonly [number, number];
  readonly tabLevel_um?: number;
  readonly strip_um?: number;
}

/** A bottom plate with a smaller top plate on it; tabs left (upper level) and right (lower level) of the bottom plate, or a strip. */
export interface ParallelPlateUnit extends AnyUnit, Met {
  readonly kind: 'parallel-plate';
  readonly topPlate_um: readonly [number, number];
  readonly plateEnclosure_um: number;
}

/**
 * Interdigitated metal: a closed frame with fingers hanging from its upper side, the bottom terminal, and within it a comb on the same
 * metal with its fingers upwards, the top terminal. Tabs as on a parallel plate; a strip widens the frame's lower side, and then a plate of
 * the bottom terminal on the stubs' metal lies under it all.
 */
export interface FramedFingersUnit extends AnyUnit, Met {
  readonly kind: 'framed-fingers';
  /** Fingers of the comb; the frame has one fewer. */
  readonly fingers: number;
  readonly fingerLength_um: number;
  readonly fingerWidth_um: number;
  /** Between the comb and the frame, all around. */
  readonly gap_um: number;
  readonly frameWidth_um: number;
  /** Height of the bar that the comb's fingers stand on. */
  readonly barWidth_um: number;
  /** True: a `VSS` strip on the trunks' metal under each column of units. */
  readonly shield?: boolean;
}

/** A cell of the user's own library, referenced and not drawn. */
export interface NamedCellUnit extends AnyUnit {
  readonly kind: 'named-cell';
  readonly cell: string;
  /** Lower left and upper right corner of what the cell occupies, in its own coordinates. */
  readonly outline_um: readonly [readonly [number, number], readonly [number, number]];
}

export type Unit = ParallelPlateUnit | FramedFingersUnit | NamedCellUnit;

export interface Gradient {
  readonly linear_ppm_per_um?: number;
  readonly quadratic_ppm_per_um2?: number | { readonly xx: number; readonly xy: number; readonly yy: number };
  readonly direction_deg?: number;
}

interface Device {
  readonly model: string;
  readonly prefix: 'C' | 'X';
  readonly terminals: readonly string[];
  readonly bulk?: string;
  readonly parameters?: Readonly<Record<string, string>>;
  readonly multiplicity?: string;
}

export interface Roles {
  readonly bottomPlate: string;
  readonly topPlate: string;
  readonly trunk: string;
  readonly stub: string;
  readonly bus: string;
  readonly strap: string;
  readonly spine: string;
  readonly marker: string;
  readonly fillExclusion: string;
  /** What a parasitic extractor leaves out, so that the unit's own capacitance does not count twice. */
  readonly extractionExclusion?: string;
  readonly boundary: string;
}

/** A ring of diffusion below the `VSS` frame that ties the substrate to it. */
interface TieRing {
  readonly diffusion: string;
  readonly implant?: string;
  /** By which the implant surrounds the diffusion. */
  readonly implantEnclosure_um?: number;
}

/** A sheet below the whole array, on `VSS` or on a net with a pin of its own. */
interface Underlay {
  readonly layer: string;
  readonly net: string;
  /** Of a well: the diffusion that joins it to wires, where no tie ring does. */
  readonly tie?: string;
}

export interface Technology {
  readonly format: 'steelyard/technology';
  readonly version: 1;
  readonly name: string;
  readonly description: string;
  readonly hookup: 'channel' | 'under-plate';
  readonly grid_nm: number;
  readonly layers: readonly Layer[];
  readonly vias: readonly Via[];
  readonly viaUnderTopPlate: boolean;
  readonly wiresUnderPlate: boolean;
  readonly dielectric: {
    readonly relativePermittivity: number;
    readonly plateCapacitance_fF_per_um2?: number;
    readonly plateFringe_fF_per_um?: number;
    readonly facingCapacitance_fF_per_um?: number;
  };
  readonly unit: Unit;
  readonly mismatch: {
    readonly coefficient_percent_um: number;
    readonly of: 'single' | 'pair';
    readonly correlatedSigma_percent?: number;
    readonly correlationLength_um?: number;
  };
  readonly gradient: Gradient;
  readonly proximityReach_um: number;
  readonly device: Device;
  readonly roles: Roles;
  /** True: a `VSS` line on the straps' metal over each channel. */
  readonly shieldLines?: boolean;
  readonly tieRing?: TieRing;
  readonly underlay?: Underlay;
}
