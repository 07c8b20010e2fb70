import { networkModel } from "../../../src/fit/network-model.js";
import type { Network } from "../../../src/model/network.js";
import type { Trial } from "../../../src/model/trial.js";
import { random } from "../../../src/numerics/random.js";
import { networkOf, trialOf } from "../../fit/load.js";
import { synthetic } from "../../fit/synthetic.js";

/** A vessel of known truth, and a test on it that can be run again and again. */
export interface Vessel {
  readonly title: string;
  readonly network: Network;
  /** SI, by name. */
  readonly truth: Readonly<Record<string, number>>;
  /** Parameters whose intervals are held against the truth. */
  readonly asked: readonly string[];
  readonly methods: readonly Method[];
  /** Indices of `noises`. */
  readonly errors: readonly number[];
  /** Refits of a set's bootstrap. */
  readonly refits: number;
  /** Starts of every fit besides the file's own values. */
  readonly starts: number;
  /** The test with errors of its own. */
  trial(seed: number, noise: Noise): Trial;
}

export type Method = "linear" | "profile" | "bootstrap";

/** Errors that are independent, or hang together from one sample to the next by this much. */
export interface Noise {
  readonly title: string;
  readonly lag1: number;
}

export const noises: readonly Noise[] = [
  { title: "white", lag1: 0 },
  { title: "AR(1), 0.5", lag1: 0.5 },
  { title: "AR(1), 0.8", lag1: 0.8 },
];

/** Normal errors of one standard deviation. */
function errors(seed: number, sd: number, { lag1 }: Noise): () => number {
  const draw = random(seed);
  let last = draw.normal();
  return () => {
    const now = last;
    last = lag1 * last + Math.sqrt(1 - lag1 * lag1) * draw.normal();
    return sd * now;
  };
}

const corner = networkOf(`network: Tank with a quiet corner
format: 1
constants: {total: 100 L}
parameters:
  corner: {value: 25 L, between: [1 L, 80 L]}
  renewal: {value: 2 L/min, between: [0.1 L/min, 20 L/min], spacing: log}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: total - corner, to: out, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: corner}
outlets: [out]
`);

const cornerTruth = { corner: 0.025, renewal: 2e-3 / 60 };

/** Smooth in its parameters: 120 readings over six mean times, errors of 1 % of the peak, the baseline fitted. */
const smooth: Vessel = {
  title: "Tank with a quiet corner (smooth)",
  network: corner,
  truth: cornerTruth,
  asked: ["corner", "renewal"],
  methods: ["linear", "profile", "bootstrap"],
  starts: 0,
  refits: 200,
  errors: [0, 1, 2],
  trial: (seed, noise) =>
    synthetic(corner, cornerTruth, {
      injection: "{at: feed, pulse: 50 g}",
      at: "out",
      times: Array.from({ length: 120 }, (_, i) => 0.5 * (i + 0.5)),
      reading: ["baseline: constant"],
      noise: errors(seed, 0.0067, noise),
    }),
};

/** Yardstick p1: the front of the tube lies between two samples, its volume is no smooth matter. */
export function p1(text: (path: string) => string): Vessel {
  const network = networkOf(
    text("test/fit/p1/p1.yaml")
      .replace("value: 0.3,", "value: 0.12,")
      .replace("value: 300 L", "value: 150 L")
      .replace("value: 100 L", "value: 250 L")
      .replace("value: 4 L/min", "value: 1.5 L/min"),
  );
  const truth = { bypass: 0.12, riser: 0.15, stagnant: 0.25, renewal: 1.5e-3 / 60 };
  const document = text("test/fit/p1/p1-pulse.yaml");
  const measured = trialOf(document, () => text("test/fit/p1/p1-data.csv"));
  const time = measured.readings[0].series?.time ?? new Float64Array(0);
  const exact = networkModel(network).respond(measured, truth, [{ time }])?.[0] ?? new Float64Array(0);
  return {
    title: "Yardstick p1, volume of the tube",
    network,
    truth,
    asked: ["riser"],
    methods: ["profile", "bootstrap"],
    starts: 8,
    refits: 100,
    errors: [0, 1, 2],
    trial(seed, noise) {
      const error = errors(seed, 6.295e-4, noise);
      const rows = Array.from(time, (t, i) => `${t / 60},${exact[i] + 0.002 + (2e-6 * t) / 60 + error()}\n`);
      return trialOf(document, () => `t_min,c_out_g_per_L\n${rows.join("")}`);
    },
  };
}

export const vessels = (text: (path: string) => string): readonly Vessel[] => [smooth, p1(text)];
