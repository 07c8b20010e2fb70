import { type Fraction, fractionAt, fractionOf } from "./dehoog.js";

/** Several Laplace transforms, worked out together: their values at s go into `re` and `im`. */
export interface Transforms {
  readonly count: number;
  at(sRe: number, sIm: number, re: Float64Array, im: Float64Array): void;
  /**
   * Where what goes round in circles may hide resonances: no less than the magnitudes at `damping` left of the imaginary
   * axis, at the height `sIm` and above. False where there is no bound. Without this, nothing is hidden.
   */
  bound?(damping: number, sIm: number, sizes: Float64Array): boolean;
}

/** A transform wanted back at some times. */
export interface Wanted {
  readonly transform: number;
  /** The transform is divided by s to this power before: 1 for its integral over time. */
  readonly power: number;
  /** Above 0, in any order. */
  readonly times: Float64Array;
  /** Largest value expected; what the error is held against, unless larger values are found in the same group. */
  readonly scale: number;
  readonly group: number;
  /** How far two node counts may differ, as a fraction of the scale; default 1e-10. */
  readonly agreement?: number;
}

export interface Inverted {
  /** One per wanted, as long as its times. */
  readonly values: readonly Float64Array[];
  /** Largest difference between the last two node counts, as a fraction of the scale: at most the agreement where all settled. */
  readonly difference: number;
  readonly settled: boolean;
}

const usualAgreement = 1e-10;
/** Terms that the continued fraction takes; those before it, if any, are summed as they are. */
const tail = 61;
const ratio = 4;
/** Damping times the earliest time of a window, tried for a bound. */
const dampings = [35, 20, 10, 0] as const;
/** e^-2cT: how much of the curve a period later is seen. */
const alias = 1e-13;

/**
 * Many Laplace transforms, smooth in time after 0, back at many times, all from the same nodes: Fourier series on the
 * Bromwich line, one line per window of times; a window ends at `unit` times a power of 4, whatever times are asked. The
 * series is summed as it is for its first terms and by continued fraction beyond; more terms are taken until two counts
 * agree to 1e-10 of the scale. A transform that decays along the line is thus summed plainly. Two counts would agree on a
 * wrong curve where resonances stand beyond both; so it is also asked that what lies beyond has died out by then.
 * @param unit  time in which the windows are counted
 * @param most  nodes per window at most
 * @param whole give up as soon as one does not settle; the values are then of no use
 * @see F.R. de Hoog, J.H. Knight, A.N. Stokes, SIAM J. Sci. Stat. Comput. 3 (1982) 357-366
 */
export function invert(
  transforms: Transforms,
  wanted: readonly Wanted[],
  unit: number,
  most = 24_000,
  whole = false,
): Inverted {
  const values = wanted.map(({ times }) => new Float64Array(times.length));
  const windows = new Map<number, Map<number, number[]>>(); // window -> wanted -> indices of times
  wanted.forEach(({ times }, w) => {
    times.forEach((t, i) => {
      const power = Math.max(-500, Math.ceil(Math.log(t / unit) / Math.log(ratio) - 1e-12));
      const rows = windows.get(power) ?? new Map<number, number[]>();
      windows.set(power, rows);
      const row = rows.get(w);
      if (row) row.push(i);
      else rows.set(w, [i]);
    });
  });
  const found = new Map<number, number>(); // group -> largest value
  let difference = 0;
  let settled = true;
  for (const [power, rows] of [...windows].sort(([a], [b]) => b - a)) {
    const window = new Window(transforms, unit * ratio ** power);
    let open = [...rows].map(([w, at]): Open => ({ w, at, last: undefined, off: Number.POSITIVE_INFINITY }));
    for (let head = 0; open.length > 0; head = 2 * head + (tail - 1) / 2) {
      if (head + tail > most) break;
      window.extend(head + tail);
      window.limit(head + tail);
      for (const o of open) {
        const { transform, power: divided, times, scale, group, agreement = usualAgreement } = wanted[o.w];
        const now = window.values(transform, divided, head, times, o.at);
        const peak = now.reduce((m, v) => Math.max(m, Math.abs(v)), Math.max(scale, found.get(group) ?? 0));
        const { last } = o;
        if (last) {
          const off = now.reduce((m, v, i) => Math.max(m, differ(v, last[i])), 0) / peak;
          // the bound is a coarse one and costs something: asked for where all else is well
          o.off = off <= agreement ? Math.max(off, window.hidden(transform, divided) > agreement * peak ? 1 : 0) : off;
          if (o.off <= agreement) found.set(group, peak);
        }
        o.last = now;
      }
      open = open.filter(({ off, last, w, at }) => {
        if (!last || off > (wanted[w].agreement ?? usualAgreement)) return true;
        at.forEach((i, k) => {
          values[w][i] = last[k];
        });
        difference = Math.max(difference, off);
        return false;
      });
    }
    if (whole && open.length > 0) return { values, difference: Number.POSITIVE_INFINITY, settled: false };
    if (open.length > 0) settled = false;
    for (const { last, off, w, at } of open) {
      difference = Math.max(difference, off);
      at.forEach((i, k) => {
        values[w][i] = last ? last[k] : Number.NaN;
      });
    }
  }
  return { values, difference, settled };
}

interface Open {
  readonly w: number;
  readonly at: readonly number[];
  last: Float64Array | undefined;
  off: number;
}

const differ = (a: number, b: number): number => (Number.isNaN(a - b) ? Number.POSITIVE_INFINITY : Math.abs(a - b));

/** A series: its terms, the first `plain` of which are summed as they are, the others by the fraction. */
interface Series {
  readonly re: Float64Array;
  readonly im: Float64Array;
  readonly fraction: Fraction | undefined;
  readonly plain: number;
}

const mostPowers = 8;

/** The nodes of one window and the transforms there. */
class Window {
  /** Magnitudes beyond the nodes, by damping; made when asked for. */
  private beyond: (Float64Array | undefined)[] | undefined;
  private readonly half: number;
  private readonly abscissa: number;
  private readonly series = new Map<number, Series>();
  private head = -1;
  private count = 0;
  private reach = 0;
  private re: Float64Array[];
  private im: Float64Array[];

  constructor(
    private readonly transforms: Transforms,
    end: number,
  ) {
    this.half = 2 * end;
    this.abscissa = -Math.log(alias) / (2 * this.half);
    this.re = Array.from({ length: transforms.count }, () => new Float64Array(0));
    this.im = this.re.map(() => new Float64Array(0));
  }

  extend(count: number): void {
    const { count: n } = this.transforms;
    this.re = this.re.map((old) => longer(old, count));
    this.im = this.im.map((old) => longer(old, count));
    const re = new Float64Array(n);
    const im = new Float64Array(n);
    for (; this.count < count; this.count++) {
      this.transforms.at(this.abscissa, (this.count * Math.PI) / this.half, re, im);
      for (let j = 0; j < n; j++) {
        this.re[j][this.count] = re[j];
        this.im[j][this.count] = im[j];
      }
    }
  }

  /** How far the nodes reach, for `hidden`. */
  limit(count: number): void {
    if (count > this.reach) this.beyond = undefined;
    this.reach = count;
  }

  /** What may at most be seen in this window of what lies beyond the nodes. */
  hidden(transform: number, power: number): number {
    const { transforms } = this;
    if (!transforms.bound) return 0;
    const height = (this.reach * Math.PI) / this.half;
    const earliest = this.half / (2 * ratio);
    this.beyond ??= dampings.map((d) => {
      const sizes = new Float64Array(transforms.count);
      return transforms.bound?.(d / earliest, height, sizes) ? sizes : undefined;
    });
    return dampings.reduce((least, d, i) => {
      const sizes = this.beyond?.[i];
      return sizes ? Math.min(least, 3 * sizes[transform] * height ** (1 - power) * Math.exp(-d)) : least;
    }, Number.POSITIVE_INFINITY);
  }

  values(transform: number, power: number, head: number, times: Float64Array, at: readonly number[]): Float64Array {
    const { re, im, fraction, plain } = this.seriesOf(transform, power, head);
    if (plain === 0 && !fraction) return new Float64Array(at.length);
    return Float64Array.from(at, (i) => {
      const angle = (Math.PI * times[i]) / this.half;
      const zRe = Math.cos(angle);
      const zIm = Math.sin(angle);
      let sRe = 0;
      let sIm = 0;
      for (let k = plain - 1; k >= 0; k--) {
        const next = re[k] + sRe * zRe - sIm * zIm;
        sIm = im[k] + sRe * zIm + sIm * zRe;
        sRe = next;
      }
      const turn = { re: Math.cos(head * angle), im: Math.sin(head * angle) };
      const sum = sRe + (fraction ? fractionAt(fraction, zRe, zIm, turn) : 0);
      return (Math.exp(this.abscissa * times[i]) / this.half) * sum;
    });
  }

  /** The series of a transform, made once for all that want it from so many terms. */
  private seriesOf(transform: number, power: number, head: number): Series {
    if (head !== this.head) this.series.clear();
    this.head = head;
    const key = mostPowers * transform + power;
    const known = this.series.get(key);
    if (known) return known;
    const { re, im, largest } = this.terms(transform, power, head + tail);
    let end = largest === 0 ? 0 : head;
    while (largest > 0 && end < head + tail && Math.hypot(re[end], im[end]) > 1e-18 * largest) end++;
    const terms = end - head - (1 - ((end - head) % 2));
    const fraction = terms >= 3 ? fractionOf(re, im, head, terms) : undefined;
    const made = { re, im, fraction, plain: fraction ? head : end };
    this.series.set(key, made);
    return made;
  }

  /** Terms of the series: the transform over s^power, the first one halved. */
  private terms(transform: number, power: number, count: number) {
    const re = this.re[transform].slice(0, count);
    const im = this.im[transform].slice(0, count);
    let largest = 0;
    for (let k = 0; k < count; k++) {
      const sIm = (k * Math.PI) / this.half;
      const size = this.abscissa * this.abscissa + sIm * sIm;
      for (let p = 0; p < power; p++) {
        const next = (re[k] * this.abscissa + im[k] * sIm) / size;
        im[k] = (im[k] * this.abscissa - re[k] * sIm) / size;
        re[k] = next;
      }
      largest = Math.max(largest, Math.abs(re[k]), Math.abs(im[k]));
    }
    re[0] /= 2;
    im[0] /= 2;
    return { re, im, largest };
  }
}

function longer(old: Float64Array, length: number): Float64Array {
  const grown = new Float64Array(length);
  grown.set(old.subarray(0, Math.min(length, old.length)));
  return grown;
}
