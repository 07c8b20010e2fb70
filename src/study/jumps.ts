import { jumpBetween, suspects } from "../numerics/jumps.js";
import { type Branches, nextTurns } from "../reaction/branches.js";
import { type SteadyState, steadyState } from "../reaction/steady.js";
import { type Input, rowWith } from "./inputs.js";
import { dutySettings, noRow, type Operation, plantOf, type Row, valuesAt } from "./operate.js";
import { statesAlong } from "./states-along.js";

/** Where figures jump as an input rises: two states, or two ways through the vessel, meet there. */
export interface JumpFound {
  /** Values of the input just before and just after, SI. */
  readonly below: number;
  readonly above: number;
  /** Lines of the report that jump, and their values (SI) on both sides. */
  readonly lines: readonly { readonly line: number; readonly before: number; readonly after: number }[];
  /**
   * As the input rises: the vessel `ignites` or `goes out` (with heat: hotter, colder), `changes` to another steady state, or
   * only a `figure` jumps, such as the first arrival of a tracer.
   */
  readonly what: "ignites" | "goes out" | "changes" | "figure";
  /** The states on both sides, once the vessel is there. Undefined where they were not followed. */
  readonly stays: Stays | undefined;
}

/** How far states on both sides of a jump go on beyond it. SI; undefined: to the end of the range. */
export interface Stays {
  /** The one after the jump ends here as the input falls again. */
  readonly down: number | undefined;
  /** The one before it ends here as the input rises, where that is past the jump; a vessel that runs there already stays. */
  readonly up: number | undefined;
}

/** A point of a sweep: the input, and the values of all lines. */
interface Point {
  readonly x: number;
  readonly values: readonly number[];
}

const shares: readonly string[] = ["conversion", "yield", "selectivity"];

/** Unknowns of a network whose states are followed along the input. */
const mostFollowed = 60;

/**
 * Jumps between points of a sweep of one input, ascending or descending alike.
 * @param row what holds besides the input
 */
export function jumpsAlong(
  operation: Operation,
  input: Input,
  points: readonly Point[],
  row: Row = noRow,
  cancelled: () => boolean = () => false,
): JumpFound[] {
  const sorted = [...points].sort((a, b) => a.x - b.x);
  const { duty } = operation;
  // What takes a run in time is not looked at more often than was asked.
  const lines = duty.report.flatMap(({ what }, line) => (what === "time-beyond" ? [] : [line]));
  const own: Operation = { ...operation, duty: { ...duty, report: lines.map((line) => duty.report[line]) } };
  const known = new Map<number, readonly number[] | undefined>(
    sorted.map((p) => [p.x, lines.map((line) => p.values[line])]),
  );
  const at = (x: number): readonly number[] | undefined => {
    if (!known.has(x)) known.set(x, cancelled() ? undefined : valuesAt(own, rowWith(row, [input], [x])));
    return known.get(x);
  };
  const found: JumpFound[] = [];
  lines.forEach((line, i) => {
    const f = (x: number): number => at(x)?.[i] ?? Number.NaN;
    for (const k of suspects(sorted.map((p) => p.values[line] ?? Number.NaN))) {
      const jump = jumpBetween(f, sorted[k].x, sorted[k + 1].x);
      if (!jump) continue;
      // A share is known to rounding: what jumps about nothing there is no jump.
      if (shares.includes(duty.report[line].what) && Math.abs(jump.after - jump.before) < 1e-9) continue;
      const { below, above, before, after } = jump;
      const here = { line, before, after };
      const same = found.findIndex((j) => j.below < above && below < j.above);
      if (same >= 0) found[same] = { ...found[same], lines: [...found[same].lines, here] };
      else found.push({ below, above, lines: [here], what: "figure", stays: undefined });
    }
  });
  if (found.length === 0) return [];
  const ends: readonly [number, number] = [sorted[0].x, sorted[sorted.length - 1].x];
  const follow = once(() => (followable(operation, row) ? statesAlong(operation, input, ends, row) : undefined));
  return found
    .sort((a, b) => a.below - b.below)
    .map((jump) => (cancelled() ? jump : named(operation, input, jump, row, follow)));
}

/** What happens to the vessel where figures jump. */
function named(
  operation: Operation,
  input: Input,
  jump: JumpFound,
  row: Row,
  follow: () => Branches | undefined,
): JumpFound {
  const { duty } = operation;
  if (jump.lines.every(({ line }) => duty.report[line].what === "tracer-time")) return jump;
  const [before, after] = [jump.below, jump.above].map((x) => stateAt(operation, rowWith(row, [input], [x])));
  if (!before || !after) return jump;
  const [colder, hotter] = [warmth(before), warmth(after)];
  const what = !duty.heat ? "changes" : hotter > colder ? "ignites" : "goes out";
  const found = follow();
  if (!found || found.branches.length === 0) return { ...jump, what };
  const down = nextTurns(found, jump.above, after).falling?.at;
  const up = nextTurns(found, jump.below, before).rising?.at;
  const past = 1e-5 * Math.abs(jump.above);
  return { ...jump, what, stays: { down, up: up === undefined || up > jump.above + past ? up : jump.above } };
}

function stateAt(operation: Operation, row: Row): SteadyState | undefined {
  const { plant } = plantOf(operation, row);
  const { duty } = operation;
  const state = plant && steadyState(plant, duty.chemistry, duty, dutySettings(duty, row));
  return state?.converged ? state : undefined;
}

const warmth = ({ temperatures }: SteadyState): number =>
  (temperatures ?? new Float64Array()).reduce((sum, t) => sum + (Number.isFinite(t) ? t : 0), 0);

/** Few enough unknowns that all states are followed along an input. */
export function followable(operation: Operation, row: Row): boolean {
  const { plant } = plantOf(operation, row);
  const { chemistry, heat } = operation.duty;
  if (!plant || !chemistry) return false;
  return plant.columns.size * (chemistry.species.length + (heat ? 1 : 0)) <= mostFollowed;
}

function once<T>(make: () => T): () => T {
  let made: { readonly value: T } | undefined;
  return () => {
    made ??= { value: make() };
    return made.value;
  };
}
