import type { Contestant, Standing } from "./contest.js";
import type { Peers } from "./peers.js";

/** Where a bench runs. */
export interface Setting {
  readonly root: string;
  /** A folder for what is made on the way. */
  readonly work: string;
  readonly peers: Peers;
  /** The command of one of our own runs (`own.ts`). */
  own(...args: string[]): readonly string[];
  /** Sizes asked for; none: all. */
  readonly sizes: readonly number[];
  readonly quick: boolean;
}

/** One table: a job that several programs do. */
export interface Planned {
  readonly title: string;
  /** What is to be reached. */
  readonly target: string;
  readonly rounds: number;
  /** Seconds for a run. */
  readonly limit: number;
  readonly contestants: readonly Contestant[];
  /** Heading of the column of errors. */
  readonly error?: string;
  readonly size?: number;
  /** What the table does not say. */
  notes?(standings: readonly Standing[]): string[];
}

export interface Bench {
  readonly name: string;
  readonly says: string;
  /** Is it run at several sizes, so that its growth is worth a line? */
  readonly grows?: boolean;
  plan(setting: Setting): AsyncIterable<Planned>;
}

/** Growth is fitted from here on. */
export const smallest = 8000;

/** The sizes of a bench that are asked for. */
export const sizesOf = (all: readonly number[], { sizes, quick }: Setting): number[] =>
  all.filter((n) => (sizes.length > 0 ? sizes.includes(n) : !quick || n <= 64_000));
