/** Stretches of a byte buffer, so that millions of cells need no string each. */

/**
 * Numbers names that stand as bytes in one table by the order of their rows: an open-addressed hash of stretches.
 * Linear in memory, 12 bytes a name beside the table itself.
 */
export class CellNames {
  private size = 0;
  private slots: Int32Array;
  private starts: Int32Array;
  private ends: Int32Array;

  /** @param expected about how many names; more are taken too */
  constructor(
    private readonly bytes: Uint8Array,
    expected = 64,
  ) {
    this.starts = new Int32Array(Math.max(16, expected));
    this.ends = new Int32Array(Math.max(16, expected));
    this.slots = new Int32Array(powerOfTwo(2 * this.starts.length)).fill(-1);
  }

  get count(): number {
    return this.size;
  }

  /** Gives the name at bytes[from, to) the next number; -1 - k where it has number k already. */
  add(from: number, to: number): number {
    if (this.size === this.starts.length) this.grow();
    const slot = this.slotOf(this.bytes, from, to);
    if (this.slots[slot] >= 0) return -1 - this.slots[slot];
    this.slots[slot] = this.size;
    this.starts[this.size] = from;
    this.ends[this.size] = to;
    return this.size++;
  }

  /** The number of the name at [from, to) of any buffer, or -1. */
  find(bytes: Uint8Array, from: number, to: number): number {
    return this.slots[this.slotOf(bytes, from, to)];
  }

  /** The number of a name, or -1. */
  numberOf(name: string): number {
    const bytes = new TextEncoder().encode(name);
    return this.find(bytes, 0, bytes.length);
  }

  nameOf(k: number): string {
    return textOf(this.bytes, this.starts[k], this.ends[k]);
  }

  /** The bytes at which the name stands in its table: from, to. */
  boundsOf(k: number): [number, number] {
    return [this.starts[k], this.ends[k]];
  }

  private slotOf(bytes: Uint8Array, from: number, to: number): number {
    const mask = this.slots.length - 1;
    for (let slot = hash(bytes, from, to) & mask; ; slot = (slot + 1) & mask) {
      const k = this.slots[slot];
      if (k < 0 || this.same(k, bytes, from, to)) return slot;
    }
  }

  private same(k: number, bytes: Uint8Array, from: number, to: number): boolean {
    const start = this.starts[k];
    if (this.ends[k] - start !== to - from) return false;
    for (let i = 0; i < to - from; i++) if (this.bytes[start + i] !== bytes[from + i]) return false;
    return true;
  }

  private grow(): void {
    const twice = (a: Int32Array): Int32Array => {
      const b = new Int32Array(2 * a.length);
      b.set(a);
      return b;
    };
    this.starts = twice(this.starts);
    this.ends = twice(this.ends);
    this.slots = new Int32Array(powerOfTwo(2 * this.starts.length)).fill(-1);
    for (let k = 0; k < this.size; k++) {
      this.slots[this.slotOf(this.bytes, this.starts[k], this.ends[k])] = k;
    }
  }
}

/** FNV-1a, 32 bits, its high bits folded in. G. Fowler, L.C. Noll, K.-P. Vo, IETF draft-eastlake-fnv. */
function hash(bytes: Uint8Array, from: number, to: number): number {
  let h = 0x811c9dc5;
  for (let i = from; i < to; i++) h = Math.imul(h ^ bytes[i], 0x01000193);
  return (h ^ (h >>> 15)) >>> 0;
}

const powerOfTwo = (atLeast: number): number => 2 ** Math.ceil(Math.log2(atLeast));

const decoder = new TextDecoder();

export const textOf = (bytes: Uint8Array, from: number, to: number): string => decoder.decode(bytes.subarray(from, to));

/** Powers of ten that a double holds exactly. */
const exactPowers = Float64Array.from({ length: 23 }, (_, k) => Number(`1e${k}`));

/**
 * The number at bytes[from, to), correctly rounded; NaN where none stands there.
 * Short ones need no string: a whole number below 2^53 times or over an exact power of ten is rounded once.
 * @param point byte of the decimal sign
 * @see W.D. Clinger, How to read floating point numbers accurately, PLDI 1990, 92-101
 */
export function numberAt(bytes: Uint8Array, from: number, to: number, point: number): number {
  let i = from;
  const sign = bytes[i];
  if (sign === minus || sign === plus) i++;
  const first = i;
  let digits = 0;
  let whole = 0;
  let power = 0;
  let seen = 0;
  let afterPoint = false;
  for (; i < to; i++) {
    const c = bytes[i];
    if (c >= zero && c <= nine) {
      seen++;
      if (digits > 0 || c > zero) digits++;
      whole = whole * 10 + (c - zero);
      if (afterPoint) power--;
    } else if (c === point && !afterPoint) afterPoint = true;
    else break;
  }
  if (seen === 0 || i === first) return Number.NaN;
  if (i < to) {
    if ((bytes[i] | 32) !== letterE) return Number.NaN;
    let j = i + 1;
    const down = bytes[j] === minus;
    if (down || bytes[j] === plus) j++;
    if (j >= to) return Number.NaN;
    let exponent = 0;
    for (; j < to; j++) {
      if (bytes[j] < zero || bytes[j] > nine) return Number.NaN;
      exponent = Math.min(99_999, exponent * 10 + (bytes[j] - zero));
    }
    power += down ? -exponent : exponent;
  }
  const size =
    digits <= 15 || whole <= Number.MAX_SAFE_INTEGER
      ? power === 0
        ? whole
        : power < 0 && power >= -22
          ? whole / exactPowers[-power]
          : power > 0 && power <= 22
            ? whole * exactPowers[power]
            : undefined
      : undefined;
  if (size !== undefined) return sign === minus ? -size : size;
  return Number(textOf(bytes, from, to).replace(String.fromCharCode(point), "."));
}

const zero = 48;
const nine = 57;
const plus = 43;
const minus = 45;
const letterE = 101;
