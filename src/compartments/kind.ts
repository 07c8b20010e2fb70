import type { KeyShape } from "../schema/shape.js";
import type { Box, Svg } from "../svg/svg.js";

/** Values of a compartment's quantity keys (SI) and of its whole-number keys. */
export interface KindValues {
  readonly values: Readonly<Record<string, number>>;
  readonly counts: Readonly<Record<string, number>>;
}

/** Everything that one kind of compartment is. One kind, one file, one line in `kinds`. */
export interface CompartmentKind {
  readonly name: string;
  /** One sentence for schema, hover and manual. */
  readonly says: string;
  /** Keys besides `kind`, `to`, `exchange`. */
  readonly keys: Readonly<Record<string, KeyShape>>;
  /** May streams pass through it? `dead` says no. */
  readonly flows: boolean;
  /** May any of this kind have `exchange:`, and may this very one? */
  readonly exchanges: boolean;
  readonly mayExchange: (counts: Readonly<Record<string, number>>) => boolean;
  /** Liquid held, m3. */
  readonly volume: (of: KindValues) => number;
  /** Spells the compartment out in primitive nodes; returns where streams enter and leave (undefined: not in the balance). */
  spell(maker: NodeMaker, of: KindValues): Ports | undefined;
  /** Its picture inside a box whose area stands for the volume. */
  picture(box: Box, of: KindValues): Svg;
  /** Proportion width / height of that box. */
  readonly aspect: (of: KindValues) => number;
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
