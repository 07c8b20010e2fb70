import type { KeyShape } from "../schema/shape.js";
import type { Box, Svg } from "../svg/svg.js";

/** Everything that one kind of compartment is. One kind, one file, one line in `kinds`. */
export interface CompartmentKind {
  readonly name: string;
  /** One sentence for schema, hover and manual. */
  readonly says: string;
  /** Keys besides `kind`, `to`, `exchange`. */
  readonly keys: Readonly<Record<string, KeyShape>>;
  /** May streams pass through it? `dead` says no. */
  readonly flows: boolean;
  /** May it have `exchange:`? */
  readonly exchanges: boolean;
  /** Spells the compartment out in primitive nodes; returns where streams enter and leave (undefined: not in the balance). */
  spell(maker: NodeMaker, values: Readonly<Record<string, number>>): Ports | undefined;
  /** Its picture inside a box whose area stands for the volume. */
  picture(box: Box, values: Readonly<Record<string, number>>): Svg;
  /** Proportion width / height of that box. */
  readonly aspect: (values: Readonly<Record<string, number>>) => number;
}

/** Where streams enter and leave a spelled-out compartment, and its members by their suffix ("1", "2"; none for one). */
export interface Ports {
  readonly entry: number;
  readonly exit: number;
  readonly members: readonly { readonly suffix: string; readonly node: number }[];
}

/** Makes primitive nodes; `chain` links two inside a compartment: all that leaves the first enters the second. */
export interface NodeMaker {
  cell(volume: number, suffix?: string): number;
  delay(volume: number, suffix?: string): number;
  joint(): number;
  chain(from: number, to: number): void;
}
