import { congruential } from "./lattice.js";

/** What the log is made of: the same vessel and test as `test/fit/p1`. L, L/min, g/L, min. Demo. */
export const truth = { bypass: 0.12, riser: 150, stagnant: 250, renewal: 1.5 } as const;
const [flow, total, dose, lasting, noise] = [10, 1000, 50, 2, 6.295e-4];

/** n readings over ten hours, evenly, none on a jump: bypass, then a tube and a tank that exchanges with a quiet corner, in closed form. */
export function logOf(n: number): string {
  const random = congruential(55_000 + n);
  let text = "t_min,c_out_g_per_L\n";
  for (let i = 0; i < n; i++) {
    const t = (600 * (i + 0.5)) / n;
    const deviate = Math.sqrt(-2 * Math.log(random())) * Math.cos(2 * Math.PI * random());
    text += `${t},${concentration(t) + 0.002 + 2e-6 * t + noise * deviate}\n`;
  }
  return text;
}

function concentration(t: number): number {
  const { bypass, riser, stagnant, renewal } = truth;
  const main = flow * (1 - bypass);
  const tank = total - riser - stagnant;
  const a = -(main + renewal) / tank;
  const d = -renewal / stagnant;
  const root = Math.sqrt((a - d) ** 2 + (4 * renewal * renewal) / (tank * stagnant));
  const rates = [(a + d + root) / 2, (a + d - root) / 2];
  const weights = [(rates[0] - d) / root, -(rates[1] - d) / root];
  const step = (x: number): number =>
    x <= 0 ? 0 : (main / tank) * rates.reduce((s, l, i) => s + (weights[i] * Math.expm1(l * x)) / l, 0);
  const inlet = dose / (flow * lasting);
  const front = t - riser / main;
  const past = t < lasting ? inlet : 0;
  return bypass * past + (1 - bypass) * inlet * (step(front) - step(front - lasting));
}

export const logTrial = (file: string): string => `trial: Pulse of two minutes, logged
format: 1
injection: {at: feed, pulse: ${dose} g, start: 0 min, lasting: ${lasting} min}
readings:
  - at: out
    file: ${file}
    time: {column: t_min, unit: min}
    value: {column: c_out_g_per_L, unit: g/L}
    baseline: drift
`;
