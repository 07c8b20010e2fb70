import { plotCurves } from "../../draw/curves.js";
import type { Chemistry } from "../../model/chemistry.js";
import { integrate } from "../../numerics/integrate.js";
import { bindKinetics, type Kinetics } from "../../reaction/kinetics.js";
import { dimensions, sameDimension } from "../../units/dimension.js";
import type { Figure } from "../input.js";

const room = 298.15;
const points = 200;
/** s; longer than any duty. */
const longest = 1e9;

/**
 * How the species of a chemistry change in a closed stirred flask that starts with one unit of everything that is only
 * consumed: a look at the rate laws, no prediction.
 */
export function chemistryFigures(chemistry: Chemistry): Figure[] {
  const { species, bases } = chemistry;
  const unit = unitOf(bases[0] ?? []);
  const kinetics = kineticsAtRoom(chemistry, unit.si);
  const consumed = (k: number, sign: number): boolean => kinetics.numbers.some((of) => Math.sign(of[k]) === sign);
  const start = species.map((_, k) => (consumed(k, -1) && !consumed(k, 1) ? 1 : 0));
  const run = settle(kinetics, start);
  if (!run) return [];
  const time = timeUnit(run.times[run.times.length - 1]);
  const x = run.times.map((t) => t / time.factor);
  const fed = species.filter((_, k) => start[k] > 0).map((s) => `'${s.name}'`);
  const warm = chemistry.needsTemperature ? " at 25 °C" : "";
  return [
    {
      name: "batch",
      ...plotCurves(
        {
          title: `${chemistry.title}: in a closed flask`,
          x: `time, ${time.name}`,
          y: `concentration, ${unit.name}`,
          lines: species.map((s, k) => ({ label: s.name, x, y: run.states.map((state) => state[k]) })),
        },
        { untitled: true },
      ),
      caption: `A closed stirred flask${warm} that starts with 1 ${unit.name} of ${fed.join(" and ")}: a look at the rate laws, no prediction for a vessel.`,
    },
  ];
}

function kineticsAtRoom(chemistry: Chemistry, scale: number): Kinetics {
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  env[chemistry.temperatureSlot] = room;
  for (const k of chemistry.order) env[n + k] = chemistry.constants[k].value.of(env);
  return bindKinetics(chemistry, env.subarray(n), new Float64Array(n).fill(scale), "limited");
}

/** Until what is consumed is down to a hundredth, or nothing moves any more; undefined where nothing moves at all. */
function settle(
  kinetics: Kinetics,
  start: readonly number[],
): { times: Float64Array; states: Float64Array[] } | undefined {
  const rhs = (_: number, y: Float64Array, dy: Float64Array): void => kinetics.production(y, 0, dy, 0);
  const first = new Float64Array(start.length);
  rhs(0, Float64Array.from(start), first);
  const fastest = Math.max(...first.map(Math.abs));
  if (!(fastest > 0) || !Number.isFinite(fastest)) return undefined;
  const jacobian = (_: number, y: Float64Array, out: Float64Array): void => kinetics.jacobian(y, 0, out, 0);
  const limits = { relative: 1e-6, absolute: 1e-9, maxSteps: 20_000 };
  const over = (to: number, outputs: ArrayLike<number>) =>
    integrate({ rhs, jacobian, start, from: 0, to, outputs, ...limits });
  let end = 1 / fastest;
  for (let last: ArrayLike<number> = start; end < longest; end *= 2) {
    const { last: here, end: how } = over(2 * end, [2 * end]);
    if (how !== "reached") return undefined;
    const moved = Math.max(...here.map((v, k) => Math.abs(v - last[k])));
    const left = Math.max(...here.map((v, k) => (start[k] > 0 ? v : 0)));
    last = here;
    if (left < 0.01 || moved < 0.002) break;
  }
  const { times, states } = over(
    2 * end,
    Float64Array.from({ length: points }, (_, k) => (2 * end * k) / (points - 1)),
  );
  return { times, states };
}

function unitOf(basis: Chemistry["bases"][number]): { name: string; si: number } {
  const [first] = basis;
  if (first && sameDimension(first, dimensions["mass concentration"])) return { name: "g/L", si: 1 };
  if (first && sameDimension(first, dimensions["molar concentration"])) return { name: "mol/L", si: 1000 };
  return { name: "1/L", si: 1000 };
}

function timeUnit(longestShown: number): { name: string; factor: number } {
  const units = [
    { name: "s", factor: 1 },
    { name: "min", factor: 60 },
    { name: "h", factor: 3600 },
    { name: "d", factor: 86_400 },
  ];
  return units.findLast((u) => longestShown >= 3 * u.factor) ?? units[0];
}
