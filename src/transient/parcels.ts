import type { Stays } from "../compartments/stays.js";
import { gaussLegendre } from "../numerics/gauss-legendre.js";
import type { Kinetics } from "../reaction/kinetics.js";
import type { Path } from "./path.js";
import type { PieceBasis, Pieces } from "./pieces.js";
import type { Signal } from "./signal.js";
import { trajectories } from "./trajectory.js";

const { point, weight } = gaussLegendre(12);
/** Towards age 0, where a share of stays may rise as a root, stretches fall by this, so many times. */
const [grade, graded] = [1 / 4, 14];
/** How far what becomes of a parcel may be off between those that are followed, scaled. */
const enough = 1e-9;
/** Parts of the longest age at which that is tried. */
const ages = [0.1, 0.4, 1];
/** Of the mean stay: no stretch of entry is cut shorter. */
const shortest = 1e-6;

/** Parcels that entered in one stretch of time: some are followed, the others lie between. */
interface Entered {
  readonly from: number;
  readonly to: number;
  /** One per place of the stretch; a single one where all entered alike. */
  readonly parcels: readonly Pieces[];
}

/** What is asked of parcels. */
export interface ParcelAsk {
  readonly kinetics: Kinetics;
  readonly stays: Stays;
  readonly path: Path;
  readonly inlet: Signal;
  /** Times at which what enters jumps or kinks, s, ascending. */
  readonly breaks: ArrayLike<number>;
  /** s: nobody is followed beyond. */
  readonly horizon: number;
  /** Up to when what enters is known by now, s, if it is needed until then. */
  readonly known: (until: number) => number;
  readonly basis: PieceBasis;
}

/** Ages that part stretches towards 0 ever more finely. */
const fine = ({ marks }: Stays): number[] => Array.from({ length: graded }, (_, k) => marks[0] * grade ** (k + 1));

const marksFrom0 = (stays: Stays): number[] => {
  const cuts = [0, ...fine(stays), ...(stays.from > 0 ? [stays.from] : []), ...stays.marks];
  return cuts.sort((a, b) => a - b);
};

/** Gauss points of stretches, each with its weight. */
function over(cuts: readonly number[], at: (x: number, w: number) => void): void {
  for (let c = 1; c < cuts.length; c++) {
    const half = (cuts[c] - cuts[c - 1]) / 2;
    for (let g = 0; g < point.length; g++) at(cuts[c - 1] + half * (1 + point[g]), half * weight[g]);
  }
}

/** Share of the volume that stays longer than x, in units of the mean stay. */
export function staysBeyond(stays: Stays, x: number): number {
  let sum = 1;
  const cuts = marksFrom0(stays);
  const before = [...cuts.filter((c) => c < x), x];
  over(before, (y, w) => {
    sum -= w * (y < stays.from ? 1 : stays.washout(y));
  });
  return Math.max(0, sum);
}

/** Parcels that stay apart from one another in a body, each reacting by itself from when it entered. */
export class Parcels {
  private readonly entered: Entered[] = [];
  private readonly follow: (mixture: Float64Array, until: number) => Pieces | undefined;
  private readonly width: number;
  private readonly weights: Float64Array;
  private readonly one: Float64Array;
  private readonly blend: Float64Array;
  private failed = false;
  private last: { mixture: Float64Array; pieces: Pieces } | undefined;
  private usual: { mixture: Float64Array; pieces: Pieces } | undefined;

  constructor(private readonly ask: ParcelAsk) {
    this.width = ask.kinetics.size;
    this.follow = trajectories(ask.kinetics, ask.basis);
    this.weights = new Float64Array(ask.basis.places.length);
    this.one = new Float64Array(this.width);
    this.blend = new Float64Array(this.width);
  }

  /** What becomes, up to an age (s), of a mixture that is likely to enter again. */
  known(mixture: Float64Array, until: number): Pieces | undefined {
    const pieces = this.follow(mixture, until);
    if (pieces) this.usual = { mixture: mixture.slice(), pieces };
    return pieces;
  }

  /** What becomes of a mixture up to an age (s). */
  trajectory(mixture: Float64Array, until: number): Pieces | undefined {
    return this.follow(mixture, until);
  }

  /**
   * Integral over stays x (in volumes displaced) from `from` to that of what entered at 0, of share(x) times what has
   * become of what entered x ago, less `base` at that age where it is given. False where something could not be followed.
   */
  integral(
    t: number,
    from: number,
    share: (x: number) => number,
    base: Pieces | undefined,
    out: Float64Array,
  ): boolean {
    const { path, stays } = this.ask;
    const { width, blend } = this;
    const own = new Float64Array(width);
    out.fill(0, 0, width);
    const oldest = path.displaced(0, t);
    if (!(oldest > from)) return true;
    this.reach(path.entered(t, from));
    if (this.failed) return false;
    // Beyond the last mark nobody is left.
    const end = Math.min(oldest, stays.marks[stays.marks.length - 1]);
    over(this.cuts(t, from, end), (x, w) => {
      const part = w * share(x);
      if (part === 0) return;
      const entered = path.entered(t, x);
      this.became(entered, t - entered, blend);
      base?.read(t - entered, 1, own, 0);
      for (let i = 0; i < width; i++) out[i] += part * (blend[i] - own[i]);
    });
    return true;
  }

  /**
   * Adds the same of what had entered before 0, all alike, as `of` says by age: stays x from that of what entered at 0, and
   * `rest` of what has stayed longest.
   */
  addOlder(t: number, from: number, share: (x: number) => number, rest: number, of: Pieces, out: Float64Array): void {
    const { path, stays } = this.ask;
    const { width, blend } = this;
    const last = stays.marks[stays.marks.length - 1];
    const begin = Math.max(from, path.displaced(0, t));
    const add = (x: number, part: number): void => {
      of.read(t - path.entered(t, x), 1, blend, 0);
      for (let i = 0; i < width; i++) out[i] += part * blend[i];
    };
    if (begin < last) {
      const inside = [stays.from, ...fine(stays), ...stays.marks].filter((x) => x > begin && x < last);
      over([begin, ...inside.sort((a, b) => a - b), last], (x, w) => add(x, w * share(x)));
    }
    add(Math.max(begin, last), rest);
  }

  /** Integral of share(x) times what has become of one mixture at age x, up to the last mark, and `rest` of what it is then. */
  weighed(of: Pieces, share: (x: number) => number, rest: number): Float64Array {
    const { stays, path } = this.ask;
    const { mean } = path;
    const own = new Float64Array(this.width);
    const sum = new Float64Array(this.width);
    const add = (x: number, part: number): void => {
      of.read(x * mean, 1, own, 0);
      for (let i = 0; i < this.width; i++) sum[i] += part * own[i];
    };
    over(marksFrom0(stays), (x, w) => add(x, w * share(x)));
    add(stays.marks[stays.marks.length - 1], rest);
    return sum;
  }

  /** Stays between which nothing is hard to follow: marks of the body, stretches of entry, and finer ones towards age 0. */
  private cuts(t: number, from: number, end: number): number[] {
    const { stays, path } = this.ask;
    // Nobody leaves before `from`: there the share that stays longer has a corner.
    const all = [from, end, stays.from, ...stays.marks, ...(from > 0 ? [] : fine(stays))];
    for (let k = this.locate(path.entered(t, end)); k < this.entered.length; k++) {
      all.push(path.displaced(this.entered[k].from, t), path.displaced(this.entered[k].to, t));
    }
    const inside = [...new Set(all)].filter((x) => x >= from && x <= end).sort((a, b) => a - b);
    const kept = inside.filter((x, k) => k === 0 || x - inside[k - 1] > 1e-13 * end);
    kept[kept.length - 1] = end;
    return kept;
  }

  /** What has become, at an age, of what entered at a time (s). */
  private became(entered: number, age: number, out: Float64Array): void {
    const { width, weights, one } = this;
    const { from, to, parcels } = this.entered[this.locate(entered)];
    if (parcels.length === 1) {
      parcels[0].read(age, 1, out, 0);
      return;
    }
    this.ask.basis.weigh(Math.max(0, Math.min(1, (entered - from) / (to - from))), weights);
    out.fill(0, 0, width);
    for (let p = 0; p < parcels.length; p++) {
      parcels[p].read(age, 1, one, 0);
      for (let i = 0; i < width; i++) out[i] += weights[p] * one[i];
    }
  }

  private locate(entered: number): number {
    let [low, high] = [0, this.entered.length];
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (this.entered[middle].from <= entered) low = middle;
      else high = middle;
    }
    return low;
  }

  /** Follows parcels up to those that enter at a time. */
  private reach(until: number): void {
    const { breaks, inlet, path, horizon, known } = this.ask;
    const { mean } = path;
    for (;;) {
      const from = this.entered.at(-1)?.to ?? 0;
      if (this.failed || from >= until || from >= horizon) return;
      let stop = horizon;
      for (let k = 0; k < breaks.length; k++) {
        if (breaks[k] > from * (1 + 1e-12)) {
          stop = Math.min(stop, breaks[k]);
          break;
        }
      }
      const seen = known(until);
      let to = Math.min(stop, seen, Math.max(inlet.pace(from, 2), from + shortest * mean));
      for (;;) {
        const parcels = this.stretch(from, to);
        if (!parcels) this.failed = true;
        else if (to - from > shortest * mean && !this.fits(from, to, parcels)) {
          to = from + (to - from) / 2;
          continue;
        } else this.entered.push({ from, to, parcels });
        break;
      }
    }
  }

  private stretch(from: number, to: number): Pieces[] | undefined {
    const { basis, inlet } = this.ask;
    const mixtures = Array.from(basis.places, (place, p) => {
      const mixture = new Float64Array(this.width);
      inlet.read(p === basis.places.length - 1 ? to : from + place * (to - from), p === 0 ? 1 : -1, mixture, 0);
      return mixture;
    });
    const alike = mixtures.every((m) => m.every((x, i) => x === mixtures[0][i]));
    const parcels = (alike ? mixtures.slice(0, 1) : mixtures).map((m) => this.parcel(m, from));
    return parcels.every((p) => p !== undefined) ? parcels : undefined;
  }

  private parcel(mixture: Float64Array, entered: number): Pieces | undefined {
    const { stays, path, horizon } = this.ask;
    for (const known of [this.last, this.usual]) {
      if (known?.mixture.every((x, i) => x === mixture[i])) return known.pieces;
    }
    const last = stays.marks[stays.marks.length - 1];
    // Where flows change what enters later may stay longer, and the same trajectory is to serve it.
    const longest = path.course.constant
      ? Math.min(horizon - entered, path.mean * last)
      : Math.max(0, horizon - entered);
    const pieces = this.follow(mixture, longest);
    // What enters later stays no longer: one trajectory serves all that enter alike.
    if (pieces) this.last = { mixture: mixture.slice(), pieces };
    return pieces;
  }

  /** Do the parcels between those that are followed become what the polynomial says? */
  private fits(from: number, to: number, parcels: readonly Pieces[]): boolean {
    if (parcels.length === 1) return true;
    const { basis, inlet } = this.ask;
    const last = basis.places.length - 1;
    const part = (basis.places[last] + basis.places[last - 1]) / 2;
    const entered = from + part * (to - from);
    const mixture = new Float64Array(this.width);
    inlet.read(entered, 1, mixture, 0);
    const true_ = this.parcel(mixture, from);
    if (!true_) return true;
    basis.weigh(part, this.weights);
    const there = new Float64Array(this.width);
    for (const age of ages) {
      true_.read(age * true_.end, 1, there, 0);
      for (let p = 0; p < parcels.length; p++) {
        parcels[p].read(age * true_.end, 1, this.one, 0);
        for (let i = 0; i < this.width; i++) there[i] -= this.weights[p] * this.one[i];
      }
      if (there.some((x) => Math.abs(x) > enough)) return false;
    }
    return true;
  }
}
