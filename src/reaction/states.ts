import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { hasInside } from "./bodies.js";
import { type Conditions, conditionsOf, type DutySettings } from "./conditions.js";
import type { Kinetics } from "./kinetics.js";
import type { Mode } from "./stability.js";
import { type SteadyState, summary } from "./summary.js";
import { Walk } from "./walk.js";

/** One of the steady states that a plant may have at a duty. */
export interface FoundState {
  readonly state: SteadyState;
  /** Does it come back after a small disturbance? Undefined where that was not judged. */
  readonly stable: boolean | undefined;
  /** Its mode that grows fastest, or fades slowest. */
  readonly mode: Mode | undefined;
  /** Does a vessel filled with what is fed, or with the duty's `contents`, run into it? Without either heat or `contents`: is it the one that `steadyState` finds? */
  readonly reached: boolean;
}

export interface StatesFound {
  /** From the coldest and least reacted on. */
  readonly states: readonly FoundState[];
  /** What was not looked into: in words, for people. */
  readonly left: readonly string[];
}

/** States that are followed downstream at most. */
const mostStates = 64;

/**
 * All steady states of a duty that a search finds: for every cell, and every circle of nodes, from many starts (cold, hot, at
 * temperatures between, reacted by arbitrary extents, drawn for each node by itself), and each of them followed downstream.
 * Stability by the eigenvalues of the balances in time, where these are cells: tubes that feed nothing back cannot upset
 * anything. Nothing proves that there are no others.
 *
 * It is a warning, never a proof of safety: not for relief, not for interlocks.
 * @see C. van Heerden, Ind. Eng. Chem. 45 (1953) 1242-1247 (several states of an exothermic reactor; from memory)
 * @throws RefusedError where the plant is larger than this version solves
 */
export function steadyStates(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  settings: DutySettings = {},
): StatesFound {
  requireCarried(plant, "reaction");
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  if (isLinear(conditions)) return { states: [], left: [] };
  const left = new Set<string>();
  const start = new Walk(plant, conditions, undefined);
  let walks: Way[] = [{ walk: start, growth: [], reached: true }];
  for (const group of start.groups) {
    walks = walks.flatMap((way) => onward(plant, conditions, way, group, left));
    if (walks.length > mostStates) {
      left.add(`more than ${mostStates} states`);
      walks = walks.slice(0, mostStates);
    }
  }
  const states = walks
    .filter(({ walk }) => walk.worst === undefined)
    .map(({ walk, growth, reached }): FoundState => {
      const known = growth.filter((m) => m !== undefined);
      const mode = known.reduce<Mode | undefined>((most, m) => (most && most.growth >= m.growth ? most : m), undefined);
      const rough = known.some((m) => m.rough);
      const judged = known.length === growth.length;
      const stable = mode && mode.growth > 0 ? false : judged ? true : undefined;
      const told = mode && rough ? { ...mode, rough } : mode;
      return { state: summary(plant, conditions, walk), stable, mode: told, reached };
    });
  return { states, left: [...left] };
}

interface Way {
  readonly walk: Walk;
  /** Of each group passed that has a say in it; undefined where it was not judged. */
  readonly growth: readonly (Mode | undefined)[];
  readonly reached: boolean;
}

function onward(plant: Plant, { heat }: Conditions, way: Way, group: Int32Array, left: Set<string>): Way[] {
  const { walk, growth, reached } = way;
  const states = walk.statesOf(group);
  if (!states || states.length === 0) {
    walk.pass(group);
    const bodies = [...group].filter((node) => walk.inflow[node] > 0 && hasInside(plant, node));
    if (group.length > 1) left.add(`${group.length} nodes that feed one another`);
    if (heat) for (const node of bodies) left.add(`what happens inside '${plant.columns.nameOf(node)}'`);
    return [{ walk, reached, growth: group.length > 1 || bodies.length > 0 ? [...growth, undefined] : growth }];
  }
  const slow = [...group].find((node) => hasInside(plant, node));
  if (slow !== undefined) left.add(`from more than a few starts, the circle through '${plant.columns.nameOf(slow)}'`);
  return states.map((state, k) => {
    const own = k === states.length - 1 ? walk : walk.fork();
    own.take(group, state);
    return { walk: own, growth: [...growth, state.mode], reached: reached && state.reached };
  });
}

/** True where no rate bends: there is one state then. */
function isLinear({ reactions: { cell }, size, heat }: Conditions): boolean {
  if (cell.numbers.length === 0) return true;
  if (heat && cell.numbers.some((row) => row[size - 1] !== 0)) return false;
  const [a, b] = [0.3, 1.7].map((level) => slopesAt(cell, level));
  const largest = Math.max(...a.map(Math.abs), ...b.map(Math.abs));
  return a.every((x, e) => Math.abs(x - b[e]) <= 1e-12 * largest);
}

function slopesAt(cell: Kinetics, level: number): Float64Array {
  const n = cell.size;
  const out = new Float64Array(n * n);
  const y = Float64Array.from({ length: n }, (_, i) => level * (1 + 0.1 * i));
  cell.jacobian(y, 0, out, 0);
  return out;
}
