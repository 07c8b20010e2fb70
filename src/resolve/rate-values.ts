import type { Chemistry } from "../model/chemistry.js";
import type { Value } from "../model/value.js";
import { lowDiscrepancy } from "../numerics/low-discrepancy.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { type Dimension, dimensions, sameDimension } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { one } from "../units/unit.js";

/** Where laws are looked at: concentrations from so little to so much, SI. */
const [least, most] = [1e-3, 1e4];
const looks = 60;
/** K. */
const roomTemperature = 298.15;
/** Up to so many species points are spread evenly; above, all have one concentration. */
const fewSpecies = 40;

/**
 * Looks at the rates of a chemistry, its constants as the file has them, at concentrations from 1e-6 to 10 mol/L: every rate must be a
 * number there; it should be one where a species is gone; and what goes one way should not go back.
 * @param laws where the rate of each reaction stands
 * @returns false where a rate is no number
 */
export function ratesHold(chemistry: Chemistry, laws: readonly Span[], report: Report): boolean {
  const { species, constants, order, temperatureSlot, reactions } = chemistry;
  const n = species.length;
  const env = new Float64Array(temperatureSlot + 1);
  env[temperatureSlot] = roomTemperature;
  for (const k of order) env[n + k] = constants[k].value.of(env);
  const points = pointsFor(n);
  let right = true;
  const forwards = backwardsWith(chemistry, new Map()) === undefined;
  reactions.forEach((reaction, r) => {
    const { text, counts } = reaction;
    const rateAt = (c: ArrayLike<number>): number => {
      for (let i = 0; i < n; i++) env[i] = c[i];
      return reaction.rate(env);
    };
    const used = speciesIn(rateAt, n, points);
    const where = (c: ArrayLike<number>): string =>
      used.map((i) => `${species[i].name} = ${amount(c[i], chemistry.bases[0][i])}`).join(", ") ||
      "the values of the file";
    const odd = points.find((c) => !Number.isFinite(rateAt(c)));
    if (odd) {
      right = false;
      report("rate-not-finite", laws[r], { text, value: words(rateAt(odd)), where: where(odd) });
      return;
    }
    const gone = goneWrong(rateAt, used, n);
    if (gone)
      report("rate-at-zero", laws[r], { text, value: words(gone.value), gone: gone.of.map((i) => species[i].name) });
    const back = counts === "molecules" && !text.includes("<->") ? points.find((c) => rateAt(c) < 0) : undefined;
    if (back) report("rate-negative", laws[r], { text, where: where(back) });
  });
  if (!right || !forwards) return right;
  for (const { name, free, value } of constants) {
    for (const bound of free?.between ?? []) {
      const back = backwardsWith(chemistry, new Map([[name, bound.of([])]]));
      if (!back) continue;
      const allowed = `${name} = ${formatQuantity(bound.of([]), value.unit ?? bound.unit ?? one)}`;
      report("rate-negative", bound.at, { ...back, allowed });
      break;
    }
  }
  return right;
}

/** A reaction that goes one way, and where its rate is negative. */
export interface Backwards {
  readonly text: string;
  readonly where: string;
}

/**
 * The first reaction that is written to go one way and would go back somewhere between 1e-6 and 10 mol/L.
 * @param set constants in place of the file's, SI
 */
export function backwardsWith(chemistry: Chemistry, set: ReadonlyMap<string, number>): Backwards | undefined {
  const { species, constants, order, temperatureSlot, reactions } = chemistry;
  const n = species.length;
  const env = new Float64Array(temperatureSlot + 1);
  env[temperatureSlot] = roomTemperature;
  for (const k of order) env[n + k] = set.get(constants[k].name) ?? constants[k].value.of(env);
  const points = pointsFor(n);
  for (const { text, counts, rate } of reactions) {
    if (counts !== "molecules" || text.includes("<->")) continue;
    const rateAt = (c: ArrayLike<number>): number => {
      for (let i = 0; i < n; i++) env[i] = c[i];
      return rate(env);
    };
    const back = points.find((c) => rateAt(c) < 0);
    if (!back) continue;
    const where = speciesIn(rateAt, n, points).map(
      (i) => `${species[i].name} = ${amount(back[i], chemistry.bases[0][i])}`,
    );
    return { text, where: where.join(", ") || "the values of the file" };
  }
  return undefined;
}

/** Constants that a document sets so that a law which the chemistry writes to go one way goes back. */
export function goesBack(
  chemistry: Chemistry,
  places: readonly ReadonlyMap<string, { readonly at: Span; readonly value: Value }>[],
  report: Report,
): void {
  if (backwardsWith(chemistry, new Map())) return;
  for (const constants of places) {
    for (const [name, { at, value }] of constants) {
      const back = backwardsWith(chemistry, new Map([[name, value.of([])]]));
      if (back)
        report("rate-backwards", at, { ...back, set: `${name} = ${formatQuantity(value.of([]), value.unit ?? one)}` });
    }
  }
}

/** Points spread over the logarithms of concentrations. */
function pointsFor(n: number): Float64Array[] {
  const next = lowDiscrepancy(Math.max(1, Math.min(n, fewSpecies)), 1);
  return Array.from({ length: looks }, () => {
    const u = next();
    return Float64Array.from({ length: n }, (_, i) => least * (most / least) ** (u[i % u.length] ?? 0.5));
  });
}

/** Species that a rate depends on. */
function speciesIn(rateAt: (c: ArrayLike<number>) => number, n: number, points: readonly Float64Array[]): number[] {
  return Array.from({ length: n }, (_, i) => i).filter((i) =>
    points.some((c) => !Object.is(rateAt(c), rateAt(c.with(i, 2 * c[i])))),
  );
}

/** The fewest species without which a rate is no number, the others at 1 mol/m3. */
function goneWrong(
  rateAt: (c: ArrayLike<number>) => number,
  used: readonly number[],
  n: number,
): { of: readonly number[]; value: number } | undefined {
  const pairs = used.flatMap((i, k) => used.slice(k + 1).map((j) => [i, j]));
  for (const of of [...used.map((i) => [i]), ...pairs, used]) {
    const c = new Float64Array(n).fill(1);
    for (const i of of) c[i] = 0;
    const value = rateAt(c);
    if (!Number.isFinite(value)) return { of, value };
  }
  return undefined;
}

const words = (x: number): string => (Number.isNaN(x) ? "not a number" : x > 0 ? "infinite" : "minus infinite");

function amount(si: number, dimension: Dimension | undefined): string {
  const unit =
    dimension && sameDimension(dimension, dimensions["mass concentration"])
      ? ({ name: "g/L", factor: 1 } as const)
      : dimension && sameDimension(dimension, dimensions["number concentration"])
        ? ({ name: "1/L", factor: 1e3 } as const)
        : ({ name: "mol/L", factor: 1e3 } as const);
  return `${formatNumber(si / unit.factor, 2)} ${unit.name}`;
}
