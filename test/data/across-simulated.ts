import { compile } from "../../src/compile/compile.js";
import type { TrialOfDay } from "../../src/data/contrast.js";
import type { Network } from "../../src/model/network.js";
import type { Trial } from "../../src/model/trial.js";
import type { Random } from "../../src/numerics/random.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { trialResponse } from "../../src/simulate/trial.js";

/** A test that is simulated: the vessel of the day, its flow, how tracer went in, and what else was so. */
export interface Day {
  readonly vessel: string;
  /** L/min. */
  readonly flow: number;
  readonly injection?: string;
  /** Share of the dose that never went in. */
  readonly lost?: number;
  readonly conditions?: Readonly<Record<string, string>>;
}

/** Two tests or more, and what is true of them. */
export interface Scenario {
  readonly name: string;
  readonly days: readonly Day[];
  readonly true: readonly string[];
}

const head = "network: Made for a test\nformat: 1\n";
const feed = (flow: number, to: string): string => `feeds: {feed: {flow: ${flow} L/min, to: ${to}}}\n`;
export const tanks = (n: number, flow: number, volume = 100): string =>
  `${head}${feed(flow, "a")}compartments: {a: {kind: cascade, volume: ${volume} L, tanks: ${n}, to: product}}\noutlets: [product]\n`;
const ahead = (share: number, flow: number): string =>
  `${head}${feed(flow, `{p: ${share} %, a: rest}`)}compartments: {p: {kind: stirred, volume: 3 L, to: product}, a: {kind: stirred, volume: 97 L, repeat: 3, to: product}}\noutlets: [product]\n`;
const corner = (exchange: number, flow: number, quiet = 20): string =>
  `${head}${feed(flow, "a")}compartments: {a: {kind: stirred, volume: ${100 - quiet} L, exchange: {q: ${exchange} L/min}, to: product}, q: {kind: stirred, volume: ${quiet} L}}\noutlets: [product]\n`;

const step = (from: number, to: number): string => `{at: feed, step: {from: ${from} g/L, to: ${to} g/L}}`;

export const scenarios: readonly Scenario[] = [
  {
    name: "three tanks, flow 1 and 2",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(3, 2), flow: 2 },
    ],
    true: ["shape-scales"],
  },
  {
    name: "8 % ahead of three tanks, flow 1, 1.5 and 2",
    days: [1, 1.5, 2].map((flow) => ({ vessel: ahead(8, flow), flow })),
    true: ["shape-scales"],
  },
  {
    name: "a quiet fifth whose exchange follows the flow, flow 1 and 2",
    days: [
      { vessel: corner(0.1, 1), flow: 1 },
      { vessel: corner(0.2, 2), flow: 2 },
    ],
    true: ["shape-scales"],
  },
  {
    name: "a quiet fifth whose exchange stays, flow 0.5 and 2",
    days: [
      { vessel: corner(0.1, 0.5), flow: 0.5 },
      { vessel: corner(0.1, 2), flow: 2 },
    ],
    true: ["spread-grows", "shape-changes"],
  },
  {
    name: "three tanks that become five at twice the flow",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(5, 2), flow: 2 },
    ],
    true: ["shape-changes"],
  },
  {
    name: "8 % ahead of three tanks at flow 1, none at 2",
    days: [
      { vessel: ahead(8, 1), flow: 1 },
      { vessel: ahead(0.01, 2), flow: 2 },
    ],
    true: ["shape-changes"],
  },
  {
    name: "three tanks, twice",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(3, 1), flow: 1 },
    ],
    true: ["repeats-agree"],
  },
  {
    name: "three tanks, the second time 8 % ahead",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: ahead(8, 1), flow: 1 },
    ],
    true: ["repeats-differ"],
  },
  {
    name: "three tanks, the second time 15 % smaller",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(3, 1, 85), flow: 1 },
    ],
    true: ["repeats-differ"],
  },
  {
    name: "three tanks, the second time a dose 15 % smaller than was noted",
    days: [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(3, 1), flow: 1, lost: 0.15 },
    ],
    true: ["repeats-differ"],
  },
  {
    name: "three tanks, a step up and a step down",
    days: [
      { vessel: tanks(3, 1), flow: 1, injection: step(0, 1) },
      { vessel: tanks(3, 1), flow: 1, injection: step(1, 0) },
    ],
    true: ["dosing-agrees"],
  },
  {
    name: "a step down that comes off a wall: a quiet two fifths then",
    days: [
      { vessel: tanks(1, 1), flow: 1, injection: step(0, 1) },
      { vessel: corner(0.05, 1, 40), flow: 1, injection: step(1, 0) },
    ],
    true: ["steps-disagree"],
  },
  {
    name: "three tanks, summer and winter",
    days: [
      { vessel: tanks(3, 1), flow: 1, conditions: { season: "summer" } },
      { vessel: tanks(3, 1), flow: 1, conditions: { season: "winter" } },
    ],
    true: [],
  },
  {
    name: "three tanks in summer, 15 % past them in winter",
    days: [
      { vessel: tanks(3, 1), flow: 1, conditions: { season: "summer" } },
      { vessel: ahead(15, 1), flow: 1, conditions: { season: "winter" } },
    ],
    true: ["conditions-matter"],
  },
];

/** The exact curve of a day: minutes since the injection and g/L. */
export function exactDay({ vessel, flow, injection = "{at: feed, pulse: 100 g}", lost = 0 }: Day) {
  const { plant } = compile(parseNetwork(vessel).document as Network);
  const { document } = parseTrial(`trial: T\nformat: 1\ninjection: ${injection}\nreadings: [{at: product}]\n`);
  if (!plant) throw new Error("no plant");
  const time = Float64Array.from({ length: 251 }, (_, i) => ((i - 10) * 4) / flow);
  const curve = trialResponse(plant, document as Trial, [{ time: time.map((t) => 60 * t) }])[0];
  return { time, curve: curve.map((c) => (1 - lost) * c) };
}

/** A day with noise of a share of the peak. */
export function dayOf(
  day: Day,
  { time, curve }: ReturnType<typeof exactDay>,
  share: number,
  noise: Random,
  title: string,
): TrialOfDay {
  const peak = curve.reduce((m, c) => Math.max(m, c), 0);
  const csv = `t,c\n${Array.from(time, (t, i) => `${t},${curve[i] + share * peak * noise.normal()}`).join("\n")}\n`;
  const text = `trial: ${title}\nformat: 1\nflows: {feed: ${day.flow} L/min}\ninjection: ${(day.injection ?? "{at: feed, pulse: 100 g}").replace(/\}$/, ", start: 0 min}")}\nreadings: [{at: product, file: l.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]\n`;
  const { document, problems } = parseTrial(text, { path: `${title}.yaml`, read: () => csv });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return { trial: document, options: {}, conditions: new Map(Object.entries(day.conditions ?? {})) };
}
