import { Part, type Plant } from "../compile/plant.js";
import { type Complex, complex } from "../numerics/complex.js";
import { adjacency, stronglyConnected } from "../numerics/graph.js";
import type { Transforms } from "../numerics/inversion.js";
import { NodeEquations } from "../transfer/node-equations.js";
import type { Passing } from "./laplace-gain.js";
import type { Copy, Passes } from "./laplace-passes.js";
import type { PassesSlope } from "./laplace-passes-slope.js";
import { type AtNode, Tangent } from "./laplace-tangents.js";

/** What to read in one copy (the last number is the rest): what leaves a node, or all that the vessel holds. */
export interface Channel {
  readonly copy: number;
  /** Undefined: the amount held, inside and on the way. */
  readonly node: number | undefined;
  /** s: seen through a first-order detector, undispersed part and all. */
  readonly lag: number;
}

/** Along one direction: how the copies move, and the detectors of the parts (s per unit of t). */
export interface MovedParts {
  readonly slope: PassesSlope | undefined;
  readonly lag: readonly number[];
}

/**
 * The transforms of parts, undelayed by the delay of their copy; and behind them, part by part, their derivatives along each
 * direction (index (1 + direction) * parts + part), the delay of the copy held.
 */
export function transformsOf(
  plant: Plant,
  passing: readonly Passing[],
  sorted: Passes,
  parts: readonly Channel[],
  moved: readonly MovedParts[] = [],
): Transforms {
  const { copies, rest, slots } = sorted;
  const { nodes, from } = plant;
  const n = nodes.length;
  const into = adjacency(n, plant.to);
  const cut = new NodeEquations(plant);
  // Only where the rest is read: its delays would leave the copies without a bound.
  const whole = parts.some(({ copy }) => copy === copies.length) ? new NodeEquations(plant) : undefined;
  const [slotRe, slotIm] = [new Float64Array(slots), new Float64Array(slots)];
  const [cRe, cIm] = [new Float64Array(n), new Float64Array(n)];
  const [spreadRe, spreadIm] = [new Float64Array(n), new Float64Array(n)];
  const share = plant.flow.map((q, k) => (nodes[plant.to[k]].inflow > 0 ? q / nodes[plant.to[k]].inflow : 0));
  const tangents = moved.map(({ slope }) => slope && new Tangent(plant, passing, sorted, slope, share));
  const [enterRe, enterIm] = [new Float64Array(n), new Float64Array(n)];
  /** Carries the derivatives along, where there are any. */
  const follow = (carry: (t: Tangent) => void): void => {
    if (!tangents.some((t) => t)) return;
    for (let i = 0; i < n; i++) {
      const mean = nodes[i].inflow > 0 ? entering(i) : complex.of(0);
      enterRe[i] = mean.re;
      enterIm[i] = mean.im;
    }
    for (const t of tangents) if (t) carry(t);
  };
  const wantedOf = copies.map((): number[] => []).concat([[]]);
  parts.forEach(({ copy }, p) => {
    wantedOf[copy].push(p);
  });
  const last = wantedOf.findLastIndex((w) => w.length > 0);
  /** Mean of what links bring to a node. */
  const entering = (i: number): Complex => {
    let re = 0;
    let im = 0;
    for (let e = into.start[i]; e < into.start[i + 1]; e++) {
      const k = into.edges[e];
      re += plant.flow[k] * cRe[from[k]];
      im += plant.flow[k] * cIm[from[k]];
    }
    return { re: re / nodes[i].inflow, im: im / nodes[i].inflow };
  };
  /** Amount held by the nodes between `entering` and outflow; cells by what is in them. */
  const held = (s: Complex, copy: Copy | undefined, of: Of): Complex => {
    const back = of(complex.of(-1)).re;
    let cells: Complex = complex.of(0);
    let between: Complex = complex.of(0);
    for (let i = 0; i < n; i++) {
      const { part, volume, inflow } = nodes[i];
      if (!(inflow > 0) || part === Part.Joint) continue;
      const out = { re: cRe[i] + (copy?.direct[i] ?? 0), im: cIm[i] };
      if (part === Part.Cell) cells = complex.add(cells, complex.scale(out, volume));
      else {
        const mean = entering(i);
        const stays = {
          re: mean.re + (copy?.enteringDirect[i] ?? 0) + back * out.re,
          im: mean.im + back * out.im,
        };
        between = complex.add(between, complex.scale(stays, inflow));
      }
    }
    return complex.add(cells, complex.multiply(between, of(complex.divide(complex.of(1), s))));
  };
  const read = (s: Complex, copy: number, re: Float64Array, im: Float64Array, of: Of): void => {
    for (const p of wantedOf[copy]) {
      const { node, lag } = parts[p];
      let value: Complex;
      if (of === sizeOf && copy < copies.length && !roundInCopies) value = complex.of(0);
      else if (node === undefined) value = held(s, copies[copy], of);
      else if (lag > 0) {
        const seen = { re: cRe[node] + (copies[copy]?.direct[node] ?? 0), im: cIm[node] };
        value = complex.multiply(seen, of(complex.divide(complex.of(1), { re: 1 + lag * s.re, im: lag * s.im })));
      } else value = { re: cRe[node], im: cIm[node] };
      re[p] = value.re;
      im[p] = value.im;
      if (node === undefined) continue;
      const none = of === sizeOf && copy < copies.length && !roundInCopies;
      moved.forEach(({ lag: lags }, d) => {
        const slope = none ? complex.of(0) : readSlope(s, copy, node, lag, lags[p], tangents[d], of);
        re[(1 + d) * parts.length + p] = slope.re;
        im[(1 + d) * parts.length + p] = slope.im;
      });
    }
  };
  /** The derivative of what a part reads: of what is there, and of the detector. */
  const readSlope = (
    s: Complex,
    copy: number,
    node: number,
    lag: number,
    lagMoves: number,
    tangent: Tangent | undefined,
    of: Of,
  ): Complex => {
    let slope: Complex = tangent ? { re: tangent.re[node], im: tangent.im[node] } : complex.of(0);
    if (!(lag > 0)) return slope;
    const seen = of(complex.divide(complex.of(1), { re: 1 + lag * s.re, im: lag * s.im }));
    const direct = of(complex.of(tangent?.slope.direct[copy]?.[node] ?? 0));
    slope = complex.multiply(seen, complex.add(slope, direct));
    if (lagMoves === 0) return slope;
    const value = { re: cRe[node] + (copies[copy]?.direct[node] ?? 0), im: cIm[node] };
    const later = of(complex.scale(complex.multiply(s, complex.multiply(seen, seen)), -lagMoves));
    return complex.add(slope, complex.multiply(later, value));
  };
  /** With `sizes` for values: magnitudes, summed as if all pulled one way. False where the circles have no bound then. */
  const solve = (s: Complex, re: Float64Array, im: Float64Array, of: Of): boolean => {
    for (let i = 0; i < n; i++) {
      const g = of(passing[i].spread(s));
      spreadRe[i] = g.re;
      spreadIm[i] = g.im;
      cut.gainRe[i] = passing[i].delay > 0 ? 0 : g.re + passing[i].direct;
      cut.gainIm[i] = passing[i].delay > 0 ? 0 : g.im;
    }
    cut.factor();
    const here: AtNode = { s, cut, whole, slotRe, slotIm, spreadRe, spreadIm, sizes: of === sizeOf };
    for (const t of tangents) t?.begin(here);
    slotRe.fill(0);
    slotIm.fill(0);
    for (let c = 0; c <= Math.min(last, copies.length - 1) || (whole && c < copies.length); c++) {
      const { seeds, exits, enteringDirect } = copies[c];
      for (let i = 0; i < n; i++) {
        const here = passing[i].delay > 0 ? 0 : enteringDirect[i];
        cRe[i] = spreadRe[i] * here;
        cIm[i] = spreadIm[i] * here;
      }
      for (const { node, slot } of seeds) {
        cRe[node] += slotRe[slot];
        cIm[node] += slotIm[slot];
      }
      cut.solve(cRe, cIm);
      if (of === sizeOf && !cRe.every((x) => x >= 0)) return false;
      follow((t) => t.copy(c, here, cRe, cIm, enterRe, enterIm));
      read(s, c, re, im, of);
      for (const { node, slot } of exits) {
        if (slot === undefined) continue;
        const mean = entering(node);
        const { direct } = passing[node];
        const [gRe, gIm] = [spreadRe[node], spreadIm[node]];
        slotRe[slot] += (gRe + direct) * mean.re - gIm * mean.im + gRe * enteringDirect[node];
        slotIm[slot] += (gRe + direct) * mean.im + gIm * mean.re + gIm * enteringDirect[node];
      }
    }
    if (!whole) return true;
    for (let i = 0; i < n; i++) {
      const g = of(passing[i].whole(s));
      whole.gainRe[i] = g.re;
      whole.gainIm[i] = g.im;
    }
    whole.factor();
    cRe.fill(0);
    cIm.fill(0);
    for (const { node, slot, delay } of rest) {
      const turn = of(complex.exp(complex.scale(s, rest[0].delay - delay)));
      cRe[node] += slotRe[slot] * turn.re - slotIm[slot] * turn.im;
      cIm[node] += slotRe[slot] * turn.im + slotIm[slot] * turn.re;
    }
    whole.solve(cRe, cIm);
    if (of === sizeOf && !cRe.every((x) => x >= 0)) return false;
    follow((t) => t.rest(here, cRe, cIm, enterRe, enterIm));
    read(s, copies.length, re, im, of);
    return true;
  };
  const count = (1 + moved.length) * parts.length;
  const unused = new Float64Array(count);
  const roundInCopies = stillRound(plant, passing);
  const round = parts.some(({ copy }) => copy === copies.length || roundInCopies);
  return {
    count,
    at(sRe, sIm, re, im) {
      solve({ re: sRe, im: sIm }, re, im, asItIs);
    },
    ...(round
      ? {
          bound: (damping: number, sIm: number, sizes: Float64Array): boolean =>
            solve({ re: -damping, im: sIm }, sizes, unused, sizeOf),
        }
      : {}),
  };
}

/** A circle of so few cells and junctions has too few poles to hide any. */
const fewCells = 12;

/** Are there circles left, where delayed nodes are cut open, in which something could ring? */
function stillRound({ nodes, from, to }: Plant, passing: readonly Passing[]): boolean {
  const left = [...from.keys()].filter((k) => !(passing[to[k]].delay > 0));
  const graph = { size: nodes.length, from: left.map((k) => from[k]), to: left.map((k) => to[k]) };
  const rings = (group: ArrayLike<number>): boolean =>
    group.length > fewCells || Array.from(group).some((i) => nodes[i].part === Part.Block);
  return (
    left.some((k) => from[k] === to[k] && rings([to[k]])) ||
    stronglyConnected(graph).some((group) => group.length > 1 && rings(group))
  );
}

type Of = (g: Complex) => Complex;
const asItIs: Of = (g) => g;
const sizeOf: Of = (g) => complex.of(complex.size(g));
