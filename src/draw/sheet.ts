import type { Tile } from "../svg/mosaic-body.js";
import type { Box, Svg } from "../svg/svg.js";

/** What a flow diagram shows, apart from any engine: bodies of liquid, streams between them, and how to print both. */
export interface FlowSheet {
  readonly title: string;
  /** One line under the title, such as the vessel's volume, feed and mean time. */
  readonly says?: string;
  readonly bodies: readonly SheetBody[];
  readonly streams: readonly SheetStream[];
  /** Bodies that belong together, outer groups first: parts. */
  readonly groups?: readonly SheetGroup[];
  readonly units: { readonly volume: SheetUnit; readonly flow: SheetUnit };
  /** What the tones of the bodies tell, where they have any: "mean age", and the values at the two ends of the scale in words; the same words where all are equal. */
  readonly tones?: { readonly quantity: string; readonly low: string; readonly high: string };
}

/** A unit to print in: SI value = number * factor (m3 or m3/s). */
export interface SheetUnit {
  readonly name: string;
  readonly factor: number;
}

export interface SheetGroup {
  readonly name: string;
  /** Names of bodies. */
  readonly members: readonly string[];
}

export type BodyRole = "feed" | "outlet" | "body" | "junction" | "dead";

export interface SheetBody {
  readonly name: string;
  /** What to print instead of the name. */
  readonly label?: string;
  /** m3; 0 for feeds, outlets and junctions. */
  readonly volume: number;
  readonly role: BodyRole;
  /** The kind's picture inside a box whose area stands for the volume; feeds and outlets need none. */
  readonly picture?: (box: Box) => Svg;
  /** Width / height of that box, 1 where nothing else is said. */
  readonly aspect?: number;
  /** A few words after the volume (an interval, a finding). */
  readonly note?: string;
  /** Where tracer enters or is seen. */
  readonly marks?: readonly ("injection" | "probe")[];
  /** Should the reader look here? */
  readonly accent?: boolean;
  /** Did a fit move it? Then `note` is its interval. */
  readonly fitted?: boolean;
  /** How many bodies it stands for, where it is drawn for several. */
  readonly stands?: number;
  /** How strong its tone is, 0 to 1, in place of the kind's own tint. */
  readonly tone?: number;
  /** Its cells, each with a tone of its own, in columns: drawn in place of its picture. */
  readonly tiles?: readonly (readonly Tile[])[];
  /** A line about the tiles. */
  readonly tilesSay?: string;
}

export type StreamRole = "forward" | "recycle" | "bypass" | "exchange";

export interface SheetStream {
  readonly from: string;
  readonly to: string;
  /** m3/s; of an exchange the flow one way. */
  readonly flow: number;
  readonly role: StreamRole;
  /** As it shall be read: "1 L/min (10 %)". */
  readonly label: string;
  readonly accent?: boolean;
  /** Did a fit move it? */
  readonly fitted?: boolean;
  /** No longer there, in a comparison. */
  readonly gone?: boolean;
}
