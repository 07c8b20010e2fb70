import type { Network } from "../model/network.js";
import type { Slot } from "../numerics/tape.js";
import type { FlowPlan } from "./flows.js";
import { branchesOf } from "./flows.js";
import { NotRecorded, type Recorder } from "./recorder.js";
import { solveThrough } from "./through-flows.js";

/** Steady flows on a tape, and as they are where it was recorded, m3/s. */
export interface RecordedFlows {
  /** By place (feeds, compartments, outlets). */
  readonly through: readonly Slot[];
  readonly throughHere: Float64Array;
  /** By stream. */
  readonly streams: readonly Slot[];
  readonly streamsHere: Float64Array;
}

/** Largest circle of places whose balances are written out. */
const mostInCircle = 12;

/** Records the flows that `solveFlows` finds; all that flows must go on flowing. */
export function recordFlows(recorder: Recorder, network: Network, plan: FlowPlan, env: Float64Array): RecordedFlows {
  const { tape } = recorder;
  const { share, fixed } = recordBranches(recorder, plan);
  const supply = plan.places.map((_, i) => {
    const feed = network.feeds[i];
    if (!feed) return tape.constant(0);
    recorder.keepPositive(recorder.named(feed.flowSlot), env[feed.flowSlot]);
    return recorder.named(feed.flowSlot);
  });
  const through: Slot[] = [];
  for (const group of plan.groups) {
    const place = new Map([...group].map((node, i) => [node, i]));
    const n = group.length;
    if (n > mostInCircle) throw new NotRecorded();
    const rhs = [...group].map((node) => supply[node]);
    const matrix = Array.from({ length: n }, () => new Array<Slot>(n).fill(tape.constant(0)));
    group.forEach((node, i) => {
      for (let e = plan.into.start[node]; e < plan.into.start[node + 1]; e++) {
        const k = plan.into.edges[e];
        const j = place.get(plan.from[k]);
        rhs[i] = tape.add(rhs[i], fixed[k]);
        if (j === undefined) rhs[i] = tape.add(rhs[i], tape.multiply(share[k], through[plan.from[k]]));
        else matrix[i][j] = tape.add(matrix[i][j], share[k]);
      }
    });
    solveCircle(recorder, matrix, rhs);
    group.forEach((node, i) => {
      through[node] = rhs[i];
    });
  }
  const streams = share.map((s, k) => tape.add(tape.multiply(s, through[plan.from[k]]), fixed[k]));
  const here = flowsHere(network, plan, env);
  streams.forEach((q, k) => {
    recorder.keepPositive(q, here.streams[k]);
  });
  return { through, throughHere: here.through, streams, streamsHere: here.streams };
}

function flowsHere(network: Network, plan: FlowPlan, env: Float64Array) {
  const branches = branchesOf(plan, env);
  const supply = Float64Array.from(plan.places, (_, i) => (network.feeds[i] ? env[network.feeds[i].flowSlot] : 0));
  const solved = solveThrough(plan, branches, supply);
  if (!("through" in solved)) throw new NotRecorded();
  const { through } = solved;
  return { through, streams: branches.share.map((s, k) => s * through[plan.from[k]] + branches.fixed[k]) };
}

/** Every stream as share * through + fixed. */
function recordBranches(recorder: Recorder, { streams, dividing }: FlowPlan): { share: Slot[]; fixed: Slot[] } {
  const { tape } = recorder;
  const share = streams.map(() => tape.constant(1));
  const fixed = streams.map(() => tape.constant(0));
  for (const { node, first } of dividing) {
    const shares: Slot[] = [];
    const flows: Slot[] = [];
    let rest = -1;
    node.streams.forEach(({ split }, n) => {
      if (split.is === "rest") rest = first + n;
      if (!("value" in split)) return;
      const slot = recorder.value(split.value);
      recorder.keepPositive(slot, recorder.at(split.value));
      if (split.is === "share") {
        share[first + n] = slot;
        shares.push(slot);
      } else {
        share[first + n] = tape.constant(0);
        fixed[first + n] = slot;
        flows.push(slot);
      }
    });
    const total = tape.sum(shares);
    if (rest >= 0) {
      share[rest] = tape.subtract(tape.constant(1), total);
      fixed[rest] = tape.negate(tape.sum(flows));
      // Only fixed flows may leave a share of nothing.
      if (recorder.moves(total)) recorder.keepPositive(share[rest], 1 - sumOf(node.streams, "share", recorder));
    } else if (recorder.moves(total)) throw new NotRecorded(); // shares that always add to 100 %: compiling sees to it
  }
  return { share, fixed };
}

function sumOf(streams: FlowPlan["streams"], is: "share" | "flow", recorder: Recorder): number {
  return streams.reduce(
    (sum, { split }) => sum + ("value" in split && split.is === is ? recorder.at(split.value) : 0),
    0,
  );
}

/** x = rhs + matrix x, in place, by elimination without pivots: what goes round a circle is less than what comes in. */
function solveCircle({ tape }: Recorder, matrix: Slot[][], rhs: Slot[]): void {
  const n = rhs.length;
  const one = tape.constant(1);
  for (let k = 0; k < n; k++) {
    const kept = tape.subtract(one, matrix[k][k]);
    rhs[k] = tape.divide(rhs[k], kept);
    for (let j = k + 1; j < n; j++) matrix[k][j] = tape.divide(matrix[k][j], kept);
    for (let i = k + 1; i < n; i++) {
      rhs[i] = tape.add(rhs[i], tape.multiply(matrix[i][k], rhs[k]));
      for (let j = k + 1; j < n; j++) matrix[i][j] = tape.add(matrix[i][j], tape.multiply(matrix[i][k], matrix[k][j]));
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    for (let j = k + 1; j < n; j++) rhs[k] = tape.add(rhs[k], tape.multiply(matrix[k][j], rhs[j]));
  }
}
