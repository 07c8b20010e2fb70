import type { Plant } from "../compile/plant.js";
import { type Complex, complex } from "../numerics/complex.js";
import type { NodeEquations } from "../transfer/node-equations.js";
import type { Passing } from "./laplace-gain.js";
import type { Passes } from "./laplace-passes.js";
import type { PassesSlope } from "./laplace-passes-slope.js";

/** What the transforms of values hand over while they are worked out. */
export interface AtNode {
  readonly s: Complex;
  readonly cut: NodeEquations;
  readonly whole: NodeEquations | undefined;
  readonly slotRe: Float64Array;
  readonly slotIm: Float64Array;
  readonly spreadRe: Float64Array;
  readonly spreadIm: Float64Array;
  /** True where magnitudes are summed in place of values. */
  readonly sizes: boolean;
}

/** The transforms' derivative along one direction, carried from copy to copy beside the transforms: the same equations, by the product rule. */
export class Tangent {
  /** Of what leaves every node in the copy at hand. */
  readonly re: Float64Array;
  readonly im: Float64Array;
  private readonly slotRe: Float64Array;
  private readonly slotIm: Float64Array;
  /** d of the undelayed gain without its undispersed part, by node. */
  private readonly spreadRe: Float64Array;
  private readonly spreadIm: Float64Array;
  /** Means of what enters: of values by moved links, then of moved values. */
  private readonly meanRe: Float64Array;
  private readonly meanIm: Float64Array;

  constructor(
    private readonly plant: Plant,
    private readonly passing: readonly Passing[],
    private readonly sorted: Passes,
    readonly slope: PassesSlope,
    /** By link. */
    private readonly share: Float64Array,
  ) {
    const n = passing.length;
    const columns = (length: number) => [new Float64Array(length), new Float64Array(length)] as const;
    [this.re, this.im] = columns(n);
    [this.slotRe, this.slotIm] = columns(sorted.slots);
    [this.spreadRe, this.spreadIm] = columns(n);
    [this.meanRe, this.meanIm] = columns(n);
  }

  begin({ s, sizes }: AtNode): void {
    this.slotRe.fill(0);
    this.slotIm.fill(0);
    this.slope.passing.forEach(({ spread }, i) => {
      if (!spread) return;
      const g = spread(s);
      this.spreadRe[i] = sizes ? complex.size(g) : g.re;
      this.spreadIm[i] = sizes ? 0 : g.im;
    });
  }

  /**
   * @param cRe,cIm        what leaves every node in copy `c`
   * @param enterRe,enterIm  mean of what links bring to it
   */
  copy(
    c: number,
    at: AtNode,
    cRe: Float64Array,
    cIm: Float64Array,
    enterRe: Float64Array,
    enterIm: Float64Array,
  ): void {
    const { passing, slope, re, im, meanRe, meanIm } = this;
    const { cut, spreadRe, spreadIm } = at;
    const { seeds, exits, enteringDirect } = this.sorted.copies[c];
    const moved = at.sizes ? slope.enteringDirect[c].map(Math.abs) : slope.enteringDirect[c];
    const directOf = (i: number): number => (at.sizes ? Math.abs(slope.passing[i].direct) : slope.passing[i].direct);
    this.bring(slope.weight, cRe, cIm, at.sizes);
    for (let i = 0; i < passing.length; i++) {
      if (passing[i].delay > 0) {
        re[i] = 0;
        im[i] = 0;
        continue;
      }
      const [gRe, gIm] = [this.spreadRe[i], this.spreadIm[i]];
      const d = directOf(i);
      const ed = enteringDirect[i];
      re[i] = gRe * (ed + enterRe[i]) - gIm * enterIm[i] + d * enterRe[i] + spreadRe[i] * moved[i];
      im[i] = gIm * (ed + enterRe[i]) + gRe * enterIm[i] + d * enterIm[i] + spreadIm[i] * moved[i];
      re[i] += cut.gainRe[i] * meanRe[i] - cut.gainIm[i] * meanIm[i];
      im[i] += cut.gainRe[i] * meanIm[i] + cut.gainIm[i] * meanRe[i];
    }
    for (const { node, slot } of seeds) this.seed(node, slot, slope.delays[c], at, complex.of(1));
    cut.solve(re, im);
    if (exits.length === 0) return;
    this.bring(this.share, re, im, false, true);
    for (const { node, slot } of exits) {
      if (slot === undefined) continue;
      const [gRe, gIm] = [this.spreadRe[node], this.spreadIm[node]];
      const whole = spreadRe[node] + passing[node].direct;
      const ed = enteringDirect[node];
      const d = directOf(node);
      this.slotRe[slot] += gRe * (ed + enterRe[node]) - gIm * enterIm[node] + d * enterRe[node];
      this.slotIm[slot] += gIm * (ed + enterRe[node]) + gRe * enterIm[node] + d * enterIm[node];
      this.slotRe[slot] += whole * meanRe[node] - spreadIm[node] * meanIm[node] + spreadRe[node] * moved[node];
      this.slotIm[slot] += whole * meanIm[node] + spreadIm[node] * meanRe[node] + spreadIm[node] * moved[node];
    }
  }

  /** The rest, tubes and all, from what leaves its nodes and enters them. */
  rest(at: AtNode, cRe: Float64Array, cIm: Float64Array, enterRe: Float64Array, enterIm: Float64Array): void {
    const { passing, slope, re, im, meanRe, meanIm } = this;
    const { s, whole, sizes } = at;
    if (!whole) return;
    const { rest, copies } = this.sorted;
    this.bring(slope.weight, cRe, cIm, sizes);
    for (let i = 0; i < passing.length; i++) {
      let g: Complex = { re: this.spreadRe[i], im: this.spreadIm[i] };
      const { delay, direct } = slope.passing[i];
      if (direct !== 0) g = { re: g.re + (sizes ? Math.abs(direct) : direct), im: g.im };
      if (passing[i].delay > 0) {
        const fall = complex.exp(complex.scale(s, -passing[i].delay));
        g = complex.multiply(sizes ? complex.of(complex.size(fall)) : fall, g);
        const gain = { re: whole.gainRe[i], im: whole.gainIm[i] };
        const late = sizes ? complex.of(complex.size(s) * Math.abs(delay)) : complex.scale(s, -delay);
        g = complex.add(g, complex.multiply(late, gain));
      }
      re[i] = g.re * enterRe[i] - g.im * enterIm[i] + whole.gainRe[i] * meanRe[i] - whole.gainIm[i] * meanIm[i];
      im[i] = g.re * enterIm[i] + g.im * enterRe[i] + whole.gainRe[i] * meanIm[i] + whole.gainIm[i] * meanRe[i];
    }
    for (const { node, slot, delay } of rest) {
      const turn = complex.exp(complex.scale(s, rest[0].delay - delay));
      this.seed(node, slot, slope.delays[copies.length], at, sizes ? complex.of(complex.size(turn)) : turn);
    }
    whole.solve(re, im);
  }

  /** What a slot brings: its own derivative, and its value coming later than the copy does. */
  private seed(
    node: number,
    slot: number,
    copyDelay: number,
    { s, slotRe, slotIm, sizes }: AtNode,
    turn: Complex,
  ): void {
    let moved: Complex = { re: this.slotRe[slot], im: this.slotIm[slot] };
    const apart = this.slope.slotDelay[slot] - copyDelay;
    if (apart !== 0) {
      const late = sizes ? complex.of(complex.size(s) * Math.abs(apart)) : complex.scale(s, -apart);
      moved = complex.add(moved, complex.multiply(late, { re: slotRe[slot], im: slotIm[slot] }));
    }
    const value = complex.multiply(turn, moved);
    this.re[node] += value.re;
    this.im[node] += value.im;
  }

  /** Means of what links bring to every node, into `mean`. */
  private bring(by: Float64Array, re: Float64Array, im: Float64Array, sizes: boolean, more = false): void {
    const { from, to } = this.plant;
    const { meanRe, meanIm } = this;
    if (!more) {
      meanRe.fill(0);
      meanIm.fill(0);
    }
    for (let k = 0; k < from.length; k++) {
      const w = sizes ? Math.abs(by[k]) : by[k];
      if (w === 0) continue;
      meanRe[to[k]] += w * re[from[k]];
      meanIm[to[k]] += w * im[from[k]];
    }
  }
}
