import type { FlowRows } from "../numerics/flow-rows.js";
import { type Slot, Tape } from "../numerics/tape.js";
import { constantsOf, tapeCode } from "../numerics/wasm/tape-code.js";
import { Kernels, roomFor, type Workspace } from "../numerics/wasm/workspace.js";
import { linearize, type Name, residual, settle, type Writer } from "./circle-kernels.js";
import type { Conserved } from "./conserved.js";
import type { Kinetics } from "./kinetics.js";

/** Species that move freely up to which their loops are written out. */
const mostWritten = 6;
/** What loops over the cells of a circle need to know of its chemistry. */
export interface WrittenLaws {
  readonly kernels: Kernels<Name>;
  readonly constants: readonly number[];
  /** Species that move freely, and those that follow from them. */
  readonly free: number;
  readonly dependent: number;
}

/**
 * The balances of cells as compiled loops: the laws of a chemistry, what follows from what, and what neighbours bring.
 * @param fall the least part of a concentration that a step of `settle` leaves of it
 * @returns undefined where laws are more than arithmetic, or too many
 */
export function writtenLaws(cell: Kinetics, conserved: Conserved, fall: number): WrittenLaws | undefined {
  const { free, dependent, follows } = conserved;
  const [n, r] = [cell.size, free.length];
  if (r === 0 || r > mostWritten || n > 4 * mostWritten) return undefined;
  const tape = new Tape();
  const inputs = Array.from({ length: n }, () => tape.input());
  const laws = cell.record?.(tape, inputs);
  if (!laws) return undefined;
  const made = [...free].map((i) => laws.made[i]);
  const slope: Slot[] = [...free].flatMap((i) =>
    [...free].map((j, k) =>
      [...dependent].reduce(
        (sum, d, at) => tape.add(sum, tape.multiply(laws.slope[i][d], tape.constant(follows[at * r + k]))),
        laws.slope[i][j],
      ),
    ),
  );
  const line = tape.program().line();
  if (!line) return undefined;
  const numbers = constantsOf(line);
  const write: Writer = {
    r,
    d: dependent.length,
    free,
    dependent,
    code: (results, of, constants, local) =>
      tapeCode(
        line,
        results === "made" ? made : results === "slope" ? slope : [...made, ...slope],
        of,
        constants,
        local,
      ),
    follows: (j, k, at) => (follows[j * r + k] === 0 ? undefined : at(numbers.length + j * r + k)),
    fall: (at) => at(numbers.length + follows.length),
  };
  return {
    kernels: new Kernels<Name>(() => [residual(write), linearize(write), settle(write)]),
    constants: [...numbers, ...follows, fall],
    free: r,
    dependent: dependent.length,
  };
}

/** Arrays that the loops go over, in a workspace, by place in flow order. */
export class CircleLoops {
  private readonly run: Readonly<Record<Name, (...values: number[]) => number>>;
  private readonly constants: Float64Array;
  private readonly end: Int32Array;
  private readonly column: Int32Array;
  private readonly share: Float64Array;
  private readonly own: Float64Array;

  /** Bytes that it takes in a workspace. */
  static room({ size, column }: FlowRows, { constants }: WrittenLaws): number {
    return roomFor({ floats: [column.length, size, constants.length], ints: [column.length, size] });
  }

  /**
   * @param memory  time constant of each place, 0 where nothing reacts
   * @param outside what comes from elsewhere, of the species that move freely
   * @param fixed   what of each dependent species no reaction changes
   */
  constructor(
    rows: FlowRows,
    laws: WrittenLaws,
    workspace: Workspace,
    private readonly memory: Float64Array,
    private readonly outside: Float64Array,
    private readonly fixed: Float64Array,
  ) {
    this.constants = workspace.floats(laws.constants.length);
    this.constants.set(laws.constants);
    this.share = workspace.floats(rows.share.length);
    this.share.set(rows.share);
    this.own = workspace.floats(rows.size);
    this.own.set(rows.own);
    this.column = workspace.ints(rows.column.length);
    this.end = workspace.ints(rows.size);
    for (let e = 0; e < rows.column.length; e++) this.column[e] = 8 * laws.free * rows.column[e];
    for (let p = 0; p < rows.size; p++) this.end[p] = this.column.byteOffset + 4 * rows.start[p + 1];
    this.run = workspace.load(laws.kernels);
  }

  /** Writes what the balances miss at y. */
  residual(y: Float64Array, f: Float64Array): void {
    this.run.residual(y.byteOffset, f.byteOffset, ...this.given(y));
  }

  /** Writes the diagonal blocks of -dF/dy at y, with what slows down in pseudo-time, `rate` in 1/s. */
  linearize(y: Float64Array, diagonal: Float64Array, rate: number): void {
    this.run.linearize(y.byteOffset, diagonal.byteOffset, ...this.given(y), rate);
  }

  /** One Newton step for every cell by itself, one after the other downstream. */
  settle(y: Float64Array): void {
    this.run.settle(y.byteOffset, ...this.given(y));
  }

  private given(y: Float64Array): number[] {
    const { outside, fixed, memory, own, end, column, share, constants } = this;
    const last = y.byteOffset + 8 * y.length;
    return [...[outside, fixed, memory, own, end, column, share, constants].map((a) => a.byteOffset), last];
  }
}
