import { type Spine, samples } from "../svg/spine.js";
import type { Box } from "../svg/svg.js";

/** What a drawing holds, for where it may be cut: boxes that stay whole, and streams that may go on in the next row. */
export interface Strip {
  readonly bounds: Box;
  readonly whole: readonly Box[];
  readonly ribbons: readonly { readonly spine: Spine; readonly width: number }[];
}

/** One row of a folded drawing: what lies between two cuts. */
export interface FoldedRow {
  readonly from: number;
  readonly to: number;
  /** Where streams are cut at its ends: y, px, and the letter that they bear on both sides. */
  readonly enter: readonly Cut[];
  readonly leave: readonly Cut[];
}

export interface Cut {
  readonly y: number;
  readonly letter: string;
}

const step = 3; // px between places that are tried
const clear = 5; // px between a cut and what stays whole
const perStream = 12; // px that a cut may stand off the middle to meet one stream less

/**
 * Cuts a long drawing into rows of about equal length, where nothing but level streams is cut; one row where it is short enough
 * or nowhere free.
 * @param longest px that a row may be long; `rows` are as long as they must where there is no free place
 */
export function folded(strip: Strip, longest: number): readonly FoldedRow[] {
  const { x, width } = strip.bounds;
  const count = Math.ceil(width / longest);
  const cuts: { x: number; ys: readonly number[] }[] = [];
  for (let k = 1; k < count; k++) {
    const ideal = x + (k * width) / count;
    const cut = bestNear(ideal, (0.45 * width) / count, strip);
    if (cut && cut.x > (cuts.at(-1)?.x ?? x) + longest / 4) cuts.push(cut);
  }
  let next = 0;
  const lettered = cuts.map((c) => c.ys.map((y): Cut => ({ y, letter: letterOf(next++) })));
  return [...cuts, undefined].map((cut, k) => ({
    from: k === 0 ? x : cuts[k - 1].x,
    to: cut ? cut.x : x + width,
    enter: k === 0 ? [] : lettered[k - 1],
    leave: lettered[k] ?? [],
  }));
}

function bestNear(ideal: number, reach: number, strip: Strip): { x: number; ys: readonly number[] } | undefined {
  let best: { x: number; ys: readonly number[]; cost: number } | undefined;
  for (let x = ideal - reach; x <= ideal + reach; x += step) {
    if (strip.whole.some((b) => x > b.x - clear && x < b.x + b.width + clear)) continue;
    const ys = crossings(x, strip);
    if (!ys) continue;
    const cost = Math.abs(x - ideal) + perStream * ys.length;
    if (!best || cost < best.cost) best = { x, ys, cost };
  }
  return best;
}

/** Heights at which streams pass x, from the top; undefined where one turns there. */
function crossings(x: number, { ribbons }: Strip): readonly number[] | undefined {
  const ys: number[] = [];
  for (const { spine, width } of ribbons) {
    const all = samples(spine, 2);
    for (const [k, p] of all.entries()) {
      if (Math.abs(p.dy) > 0.05 && Math.abs(p.x - x) < width / 2 + clear) return undefined;
      const after = all[k + 1];
      if (after && p.x <= x !== after.x <= x) ys.push(p.y);
    }
  }
  return ys.sort((a, b) => a - b);
}

/** a to z, then a1 and on. */
const letterOf = (k: number): string => "abcdefghijklmnopqrstuvwxyz"[k % 26] + (k < 26 ? "" : Math.floor(k / 26));
