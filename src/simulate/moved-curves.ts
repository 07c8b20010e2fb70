import { sparseRows } from "../numerics/sparse.js";
import { DrivenSteps } from "./driven-steps.js";
import { exact } from "./exact.js";
import { type Drive, type Query, since } from "./linear-system.js";
import type { MovedPassage, MovedSystem } from "./moved-system.js";

/** Curves of the probes, and by direction their derivatives; both to be added to. */
export interface Curves {
  readonly value: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[])[];
}

/** Up to so many states a system is stepped densely, with its derivatives beside it. */
const fewStates = 12;

/**
 * Adds what the probes of a system see of a drive. The derivative of what is seen late at u = t - d is that of the states, of
 * the sum over them, and -d(delay)/dt times the slope in time; at a jump or kink from the right.
 * @param times  per probe: s since the drive began, ascending, without any delay
 */
export function addCurves(system: MovedSystem, drive: Drive, times: readonly Float64Array[], into: Curves): void {
  if (system.rows.length <= fewStates) addDensely(system, drive, times, into);
  else addByEngine(system, drive, times, into);
}

function addDensely(system: MovedSystem, drive: Drive, times: readonly Float64Array[], into: Curves): void {
  const dense = system.dense();
  const { n } = dense;
  const steps = new DrivenSteps(dense, drive);
  system.probes.forEach((passages, r) => {
    for (const passage of passages) {
      const { states, weights, direct, delays } = passage;
      const first = firstSeen(times[r], passage.delay);
      const looks = into.slopes.map((_, p) => lookOf(system, passage, p));
      const value = into.value[r];
      const moving = states.length > 0 || looks.some((look) => look.states.length > 0);
      const path = steps.along(times[r], first, { start: 0, delay: passage.delay }, moving);
      for (let i = 0; first + i < value.length; i++) {
        const [v, at, rate] = [path.states, i * path.length, path.rate[i]];
        let sum = direct * rate;
        for (let j = 0; j < states.length; j++) sum += weights[j] * v[at + states[j]];
        value[first + i] += sum;
        for (let p = 0; p < looks.length; p++) {
          const look = looks[p];
          const own = at + (p + 1) * n;
          let moved = look.direct * rate - delays[p] * direct * path.rise[i];
          for (let j = 0; j < states.length; j++) moved += weights[j] * v[own + states[j]];
          for (let j = 0; j < look.states.length; j++) moved += look.weights[j] * v[at + look.states[j]];
          into.slopes[p][r][first + i] += moved;
        }
      }
    }
  });
}

/** The first time at which tracer has come. */
export function firstSeen(times: Float64Array, delay: number, start = 0): number {
  let [low, high] = [0, times.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (since(times[middle] - start, delay) < 0) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** The part of a derivative that is read from the states themselves: moved weights, and the shift in time. */
function lookOf({ rows, input }: MovedSystem, passage: MovedPassage, p: number) {
  const { states, weights, delays, moved } = passage;
  const sum = new Map(moved[p].weights);
  let { direct } = moved[p];
  if (delays[p] !== 0) {
    states.forEach((s, j) => {
      const factor = -delays[p] * weights[j];
      for (const [column, rate] of rows[s]) sum.set(column, (sum.get(column) ?? 0) + factor * rate);
      direct += factor * input[s];
    });
  }
  return { states: Int32Array.from(sum.keys()), weights: Float64Array.from(sum.values()), direct };
}

/** A large system and its derivatives as one larger system, for the exact engine. */
function addByEngine(system: MovedSystem, drive: Drive, times: readonly Float64Array[], into: Curves): void {
  const { rows, movedRows, input, movedInput, probes } = system;
  const n = rows.length;
  const all = [...rows];
  movedRows.forEach((moved, p) => {
    moved.forEach((row, i) => {
      const whole = new Map(row);
      for (const [j, x] of rows[i]) whole.set((p + 1) * n + j, x);
      all.push(whole);
    });
  });
  const queries: Query[] = [];
  const adders: ((values: Float64Array) => void)[] = [];
  probes.forEach((passages, r) => {
    for (const passage of passages) {
      const { states, weights, direct, delay, delays } = passage;
      const local = times[r].map((t) => since(t, delay));
      const ask = (signal: Query["signal"], into: Float64Array, late: number): void => {
        queries.push({ signal, times: local, integral: false });
        adders.push((values) => {
          for (let i = 0; i < into.length; i++) {
            into[i] += values[i];
            if (late !== 0 && local[i] >= 0) into[i] -= late * driveSlope(drive, local[i]);
          }
        });
      };
      ask({ states, weights, direct }, into.value[r], 0);
      into.slopes.forEach((slopes, p) => {
        const look = lookOf(system, passage, p);
        const signal = {
          states: Int32Array.from([...states].map((s) => (p + 1) * n + s).concat([...look.states])),
          weights: Float64Array.from([...weights, ...look.weights]),
          direct: look.direct,
        };
        ask(signal, slopes[r], delays[p] * direct);
      });
    }
  });
  const whole = { rates: sparseRows(all), input: Float64Array.from([...input, ...movedInput.flat()]) };
  const { answers } = exact.run(whole, drive, queries);
  answers.forEach((a, q) => {
    adders[q](a.value);
  });
}

/** Slope of the rate, from the right. */
function driveSlope(drive: Drive, u: number): number {
  let piece = -1;
  while (piece + 1 < drive.times.length && drive.times[piece + 1] <= u) piece++;
  return piece < 0 ? 0 : drive.slope[piece];
}
