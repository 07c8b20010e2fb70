export interface Edge {
  readonly from: string;
  readonly to: string;
}

/** A stream that passes blocks above or below them all: beside the blocks at its ends it goes up or down. */
export interface Lane extends Edge {
  readonly side: "over" | "under";
}

/**
 * Swaps neighbours within columns as long as that leaves fewer crossings, those of lanes' upright pieces with onward streams
 * included, which an order by onward streams alone does not see.
 * @param columns ids from the top, column by column; reordered in place
 * @param steps   onward streams in steps of one column each
 */
export function untangle(columns: string[][], steps: readonly Edge[], lanes: readonly Lane[]): void {
  const column = new Map(columns.flatMap((ids, c) => ids.map((id) => [id, c] as const)));
  const rank = new Map(columns.flatMap((ids) => ids.map((id, k) => [id, k] as const)));
  const at = (id: string): number => rank.get(id)!;
  const gaps = columns.map((_, c) => steps.filter((s) => column.get(s.from) === c && column.get(s.to) === c + 1));
  const starting = columns.map((_, c) => lanes.filter((l) => column.get(l.from) === c));
  const ending = columns.map((_, c) => lanes.filter((l) => column.get(l.to) === c));

  /** Does the piece that goes up or down from rank `own` pass a stream at rank `other`? */
  const passes = (side: Lane["side"], own: number, other: number): boolean =>
    side === "under" ? other > own : other < own;

  const inGap = (c: number): number => {
    const own = gaps[c] ?? [];
    let count = 0;
    for (let i = 0; i < own.length; i++) {
      for (let j = 0; j < i; j++) {
        if ((at(own[i].from) - at(own[j].from)) * (at(own[i].to) - at(own[j].to)) < 0) count++;
      }
    }
    for (const lane of starting[c] ?? []) {
      for (const s of own) if (passes(lane.side, at(lane.from), at(s.from))) count++;
    }
    for (const lane of ending[c + 1] ?? []) {
      for (const s of own) if (passes(lane.side, at(lane.to), at(s.to))) count++;
    }
    return count;
  };

  const swap = (ids: string[], k: number): void => {
    [ids[k], ids[k + 1]] = [ids[k + 1], ids[k]];
    rank.set(ids[k], k);
    rank.set(ids[k + 1], k + 1);
  };

  for (let better = true; better; ) {
    better = false;
    columns.forEach((ids, c) => {
      for (let k = 0; k + 1 < ids.length; k++) {
        const before = inGap(c - 1) + inGap(c);
        swap(ids, k);
        if (inGap(c - 1) + inGap(c) < before) better = true;
        else swap(ids, k);
      }
    });
  }
}
