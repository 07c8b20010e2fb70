import type { MixedRows } from "./mixed-rows.js";
import { type Code, f64, i32, type Kernel, kernel, loopWhile, type Variable } from "./wasm/assembler.js";
import { Kernels, roomFor, type Workspace } from "./wasm/workspace.js";

/** Rows up to this width have a kernel of their own, without an inner loop. */
const widest = 8;

type Name = `row${number}` | "anyRow";

/** A stretch of rows of one width. */
interface Stretch {
  readonly width: number;
  readonly count: number;
  /** First place, first entry. */
  readonly place: number;
  readonly entry: number;
}

/**
 * The rows of states of a system, those of one width together, each stretch in the order in which its rows came; compiled loops
 * run over them.
 */
export class RowsByWidth {
  /** Place of each unknown; those that hold nothing stay where they were. */
  readonly place: Int32Array;
  /** Entries, row after row by place. */
  readonly value: Float64Array;
  private readonly column: Int32Array;
  /** The rows of unknowns that hold nothing, columns by place. */
  private readonly settled: { readonly start: Int32Array; readonly column: Int32Array; readonly value: Float64Array };
  private readonly stretches: readonly Stretch[];
  private readonly run: ReturnType<Workspace["load"]>;

  /** Bytes that it takes in a workspace. */
  static room({ states, start }: MixedRows): number {
    return roomFor({ floats: [start[states]], ints: [start[states]] });
  }

  /** @param entryOf what stands for an entry of the rows */
  constructor(
    private readonly rows: MixedRows,
    workspace: Workspace,
    entryOf: (value: number, diagonal: boolean) => number,
  ) {
    const { size, states, start, column, value } = rows;
    const counts: number[] = [];
    for (let i = 0; i < states; i++) {
      const width = start[i + 1] - start[i];
      counts[width] = (counts[width] ?? 0) + 1;
    }
    const stretches: Stretch[] = [];
    const next: number[] = [];
    let [place, entry] = [0, 0];
    counts.forEach((count, width) => {
      stretches.push({ width, count, place, entry });
      next[width] = place;
      place += count;
      entry += count * width;
    });
    this.stretches = stretches;
    this.place = new Int32Array(size);
    for (let i = 0; i < size; i++) this.place[i] = i < states ? next[start[i + 1] - start[i]]++ : i;
    this.value = workspace.floats(start[states]);
    this.column = workspace.ints(start[states]);
    const first = new Float64Array(counts.length);
    for (const s of stretches) first[s.width] = s.entry - s.place * s.width;
    for (let i = 0; i < states; i++) {
      const width = start[i + 1] - start[i];
      let at = first[width] + this.place[i] * width;
      for (let e = start[i]; e < start[i + 1]; e++, at++) {
        this.value[at] = entryOf(value[e], column[e] === i);
        this.column[at] = 8 * this.place[column[e]]; // bytes
      }
    }
    const behind = column.slice(start[states], start[size]);
    for (let e = 0; e < behind.length; e++) behind[e] = this.place[behind[e]];
    this.settled = { start: start.slice(states), column: behind, value: value.slice(start[states], start[size]) };
    this.run = workspace.load(kernels);
  }

  /** Gives the unknowns that hold nothing their values; no allocation. */
  settle(x: Float64Array): void {
    const { size, states } = this.rows;
    const { start, column, value } = this.settled;
    for (let i = states; i < size; i++) {
      let sum = 0;
      for (let e = start[i - states] - start[0]; e < start[i - states + 1] - start[0]; e++)
        sum += value[e] * x[column[e]];
      x[i] = sum;
    }
  }

  /**
   * before <- forward * (value now) - back * before, by place.
   * @returns the sum of volume times now
   */
  step(now: Float64Array, before: Float64Array, forward: number, back: number, volume: Float64Array): number {
    const { value, column, run } = this;
    let total = 0;
    for (const { width, count, place, entry } of this.stretches) {
      const by = run[width <= widest ? `row${width}` : "anyRow"];
      const [values, columns] = [value.byteOffset + 8 * entry, column.byteOffset + 4 * entry];
      const [first, end] = [before.byteOffset + 8 * place, before.byteOffset + 8 * (place + count)];
      const [own, of] = [now.byteOffset + 8 * place, volume.byteOffset + 8 * place];
      total += by(values, columns, now.byteOffset, own, first, end, of, forward, back, width);
    }
    return total;
  }
}

const kernels = new Kernels<Name>(() => [...Array.from({ length: widest + 1 }, (_, width) => rowOf(width)), anyRow()]);

const parameters = ["i32", "i32", "i32", "i32", "i32", "i32", "i32", "f64", "f64", "i32"] as const;

/** Moves an address on. */
const on = (address: Variable, bytes: number): Code => address.set(i32.add(address.get, i32.of(bytes)));

/** before <- forward * sum - back * before. */
const turned = (before: Variable, forward: Variable, back: Variable, sum: Code): Code =>
  f64.store(before.get, f64.sub(f64.mul(forward.get, sum), f64.mul(back.get, f64.load(before.get))));

/** Sum of value times what its column holds, for so many entries, added in pairs. */
function products(width: number, value: Code, column: Code, now: Code): Code {
  let sums = Array.from({ length: width }, (_, k) =>
    f64.mul(f64.load(value, 8 * k), f64.load(i32.add(now, i32.load(column, 4 * k)))),
  );
  if (width === 0) return f64.of(0);
  while (sums.length > 1) {
    sums = sums.flatMap((s, k) => (k % 2 === 1 ? [] : [k + 1 < sums.length ? f64.add(s, sums[k + 1]) : s]));
  }
  return sums[0];
}

const rowOf = (width: number): Kernel<Name> =>
  kernel<Name>(`row${width}`, parameters, "f64", (given, local) => {
    const [value, column, now, own, before, end, volume, forward, back] = given;
    const total = local("f64");
    return [
      loopWhile(
        i32.less(before.get, end.get),
        turned(before, forward, back, products(width, value.get, column.get, now.get)),
        total.set(f64.add(total.get, f64.mul(f64.load(volume.get), f64.load(own.get)))),
        on(value, 8 * width),
        on(column, 4 * width),
        on(own, 8),
        on(before, 8),
        on(volume, 8),
      ),
      total.get,
    ];
  });

const anyRow = (): Kernel<Name> =>
  kernel<Name>("anyRow", parameters, "f64", (given, local) => {
    const [value, column, now, own, before, end, volume, forward, back, width] = given;
    const [total, sum, last] = [local("f64"), local("f64"), local("i32")];
    return [
      loopWhile(
        i32.less(before.get, end.get),
        sum.set(f64.of(0)),
        last.set(i32.add(column.get, i32.shiftLeft(width.get, 2))),
        loopWhile(
          i32.less(column.get, last.get),
          sum.set(f64.add(sum.get, products(1, value.get, column.get, now.get))),
          on(value, 8),
          on(column, 4),
        ),
        turned(before, forward, back, sum.get),
        total.set(f64.add(total.get, f64.mul(f64.load(volume.get), f64.load(own.get)))),
        on(own, 8),
        on(before, 8),
        on(volume, 8),
      ),
      total.get,
    ];
  });
