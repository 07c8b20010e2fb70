import { block } from "../reaction/block-matrix.js";
import { solveNewton } from "../reaction/newton.js";
import type { Scene } from "./scene.js";
import type { Held, Stage } from "./stage.js";
import type { Start } from "./start.js";

/**
 * The state of a stage at time 0.
 * @param entering what enters a node before
 */
export function startingState(
  scene: Scene,
  stage: Stage,
  start: Start,
  entering: (node: number) => Float64Array,
): Float64Array {
  const { width } = scene;
  const x = new Float64Array(stage.size);
  for (const held of stage.held) {
    const { node, first, states, realization } = held;
    const uniform = start.is === "contents" ? start.holding(node) : start.leaving(node);
    for (let s = first; s < first + states; s++) x.set(uniform, s * width);
    if (start.is === "steady" && realization) {
      x.set(balanced(held, scene.plant.columns.inflow[node], entering(node), uniform), first * width);
    }
  }
  return x;
}

/** States of a body in balance with what enters it. */
function balanced(held: Held, flow: number, entering: Float64Array, guess: Float64Array): Float64Array {
  const { realization, kinetics, states: count } = held;
  const n = kinetics[0].size;
  const y = new Float64Array(count * n);
  for (let s = 0; s < count; s++) y.set(guess, s * n);
  if (!realization) return y;
  const { through, still, input } = realization;
  const slope = new Float64Array(n * n);
  const rate = realization.through.value.reduce((most, a) => Math.max(most, Math.abs(a)), 0) * flow;
  solveNewton(
    {
      count,
      size: n,
      memory: new Float64Array(count).fill(1 / rate),
      residual(x, f) {
        for (let s = 0; s < count; s++) {
          kinetics[s].production(x, s * n, f, s * n);
          for (let i = 0; i < n; i++) {
            let sum = f[s * n + i] + flow * input[s] * entering[i];
            for (let e = through.start[s]; e < through.start[s + 1]; e++)
              sum += flow * through.value[e] * x[through.column[e] * n + i];
            for (let e = still.start[s]; e < still.start[s + 1]; e++)
              sum += still.value[e] * x[still.column[e] * n + i];
            f[s * n + i] = sum / rate;
          }
        }
        return f.every(Number.isFinite);
      },
      jacobian(x, m) {
        for (let s = 0; s < count; s++) {
          kinetics[s].jacobian(x, s * n, slope, 0);
          const d = block(m, s, s);
          for (let e = 0; e < n * n; e++) d[e] += slope[e] / rate;
          const tie = (j: number, a: number): void => {
            const b = block(m, s, j);
            for (let i = 0; i < n; i++) b[i * n + i] += a / rate;
          };
          for (let e = through.start[s]; e < through.start[s + 1]; e++) tie(through.column[e], flow * through.value[e]);
          for (let e = still.start[s]; e < still.start[s + 1]; e++) tie(still.column[e], still.value[e]);
        }
        return true;
      },
    },
    y,
  );
  return y;
}
