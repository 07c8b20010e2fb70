import type { Input } from "../study/inputs.js";
import type { Operation, Row } from "../study/operate.js";

export interface SweepOptions {
  readonly duty: string;
  readonly over?: readonly string[];
  readonly aim?: string;
  readonly by?: string;
  readonly between?: string;
  readonly confidence?: string;
  readonly trial?: readonly string[];
  readonly set?: readonly string[];
  readonly draws?: number;
  readonly seed: number;
  readonly output?: string;
}

/** What is swept, and what is unsure about it. */
export interface Asked {
  readonly operation: Operation;
  readonly rows: readonly Row[];
  /** In words, what intervals carry; empty where nothing is unsure. */
  readonly carries: string;
}

/** What intervals carry, and what of it they do not where it moves: a fitted value has the one that it is given. */
export function carriedBeside(carries: string, rows: readonly Row[], moved: readonly Input[]): string {
  const known = moved.filter(({ name, of, sd }) => !sd && rows[0]?.[of][name] !== undefined).map((i) => i.name);
  return known.length === 0 ? carries : `${carries}; ${known.join(" and ")} taken to be just what it is set to`;
}
