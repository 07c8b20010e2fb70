import { entry } from "../problem.js";

/** What can be wrong with a fit before it runs, and what a reader of its result must know. */
export const runEntries = {
  "not-carried": entry({
    severity: "error",
    says: (d: { name: string; is: string; engine: "exact" | "ode" }) =>
      `'${d.name}' is ${d.is}, which the ${d.engine} engine cannot follow in time`,
    fix: (d) =>
      d.engine === "ode"
        ? "ask for `--engine laplace`, without `--verify`; the ode engine needs a `volume` above 0 beside pockets, a Péclet number under 1.6e7, and pockets visited less than 20,000 times"
        : "leave the choice of the engine to the tool, or ask for `--engine laplace` or `--engine ode`",
    example: { name: "core", is: "axial dispersion", engine: "exact" },
  }),
  "trial-of-reaction": entry({
    severity: "error",
    says: (d: { title: string; what: string }) => `${d.what} is of tracers, and '${d.title}' is a trial of a reaction`,
    fix: "give it a trial with an `injection:`; a trial with a `chemistry:` is read by `fit` and `study`",
    example: { title: "Flask at 25 degC", what: "`moments`" },
  }),
  "flows-vary": entry({
    severity: "error",
    says: (d: { engine: string; feed: string }) =>
      `the ${d.engine} engine needs steady flows, but the flow of '${d.feed}' is a log`,
    fix: "leave the choice to the tool, or ask for `--engine ode`, without `--verify`: only the ode engine follows flows that vary",
    example: { engine: "laplace", feed: "feed" },
  }),
  "flows-vary-body": entry({
    severity: "error",
    says: (d: { name: string; is: string }) => `'${d.name}' is ${d.is}, which cannot be followed while flows vary`,
    fix: "use `kind: dispersed` with a large Péclet number and the same pockets, or a mean flow",
    example: { name: "reach", is: "plug flow past stagnant pockets" },
  }),
  "too-many-passes": entry({
    severity: "error",
    says: (_: Record<never, never>) =>
      "tracer goes round this closed vessel more often than 10,000 passes through its tubes can tell apart",
    fix: "ask for a shorter time with `--until`; where the mixing is over, the level is the amount over the volume",
    example: {},
  }),
  "loop-too-short": entry({
    severity: "error",
    says: (d: { name: string; passes: number }) =>
      `'${d.name}' delays so little, in a loop, that the ode engine would need about ${d.passes.toExponential(0)} steps: no step may be longer than a pass through it`,
    fix: "leave the choice of the engine to the tool, without `--verify`, or ask for a shorter time with `--until`; if the delay does not matter, give the tube `volume: 0 L`",
    example: { name: "pipe", passes: 1e8 },
  }),
  "unknown-free": entry({
    severity: "error",
    says: (d: { name: string; nearest: string | undefined; names: readonly string[] }) =>
      `'${d.name}' is no parameter of this network${d.nearest ? `; did you mean '${d.nearest}'?` : ""}`,
    fix: (d) =>
      d.names.length > 0 ? `free one of ${d.names.join(", ")}` : "list what a fit may move under `parameters:` first",
    example: { name: "bypas", nearest: "bypass", names: ["bypass", "riser"] },
  }),
  "nothing-to-fit": entry({
    severity: "error",
    says: (_: Record<never, never>) => "the network has no parameters, so there is nothing to fit",
    fix: "move what is not known from `constants:` to `parameters:`, with a value and bounds: `riser: {value: 150 L, between: [5 L, 480 L]}`",
    example: {},
  }),
  "no-points": entry({
    severity: "error",
    says: (d: { trials: number }) =>
      d.trials === 0 ? "there is no trial to fit to" : "no trial has a reading with points that are not left out",
    fix: "give at least one reading a `file:` with times and values",
    example: { trials: 1 },
  }),
  "no-signal-to-fit": entry({
    severity: "error",
    says: (d: { key: string; value: string; others: number }) =>
      `'${d.key}' never changes: every point is ${d.value}${d.others > 0 ? `, and ${d.others === 1 ? "the other reading does not change" : `the ${d.others} other readings do not change`} either` : ""}`,
    fix: "check the column, the detector and the dose; where no tracer came by, there is nothing that a network could explain",
    example: { key: "Salt pulse/product", value: "0 g/L", others: 0 },
  }),
  "all-beyond-limits": entry({
    severity: "error",
    says: (d: { key: string; side: "below" | "beyond"; others: number }) =>
      `every point of '${d.key}'${d.others > 0 ? " and of all other readings" : ""} is ${d.side} a limit of the detector: nothing was measured that could be fitted`,
    fix: "check `limits:` and its units; else plan another dose or a detector of another range",
    example: { key: "Salt pulse/product", side: "below", others: 0 },
  }),
  "only-noise-to-fit": entry({
    severity: "error",
    says: (d: { key: string; others: number }) =>
      `'${d.key}' is not told from noise${d.others > 0 ? `, nor ${d.others === 1 ? "is the other reading" : `are the ${d.others} other readings`}` : ""}: any fit to it would be numbers made of nothing`,
    fix: "plan a larger dose (`backmix plan`): a peak should be 50 times the noise or more; check that this is the right column",
    example: { key: "Salt pulse/product", others: 0 },
  }),
  "explains-nothing": entry({
    severity: "warning",
    says: (d: { times: number }) =>
      `the network explains nothing of these readings: the fit leaves ${d.times > 100 ? "more than 100" : d.times.toFixed(1)} times the sum of squares that a flat line through each leaves`,
    fix: "take no number from it: check dose, units, time zero and which outlet was read; `scale: free` shows whether the shape alone would fit",
    example: { times: 3.2 },
  }),
  "one-reading-rules": entry({
    severity: "warning",
    says: (d: { key: string; time: string; share: number; atInjection: boolean }) =>
      `one reading holds the fit against all others: without that of '${d.key}' at ${d.time}${d.atInjection ? ", the very moment of an injection," : ""} ${Math.min(99, Math.round(100 * d.share))} % of the misfit would be gone`,
    fix: (d) =>
      d.atInjection
        ? `the model jumps at that moment, and a reading taken just before it does not: leave it out (\`leave-out: [{from: ${d.time}, to: ${d.time}, because: …}]\`) and fit again; take no number from this fit`
        : `look at the log there (an electric spike, a wrong clock); if there is a reason, leave it out (\`leave-out: [{from: ${d.time}, to: ${d.time}, because: …}]\`) and fit again; take no number from this fit`,
    example: { key: "Salt pulse/product", time: "0 min", share: 0.98, atInjection: true },
  }),
  "too-few-points": entry({
    severity: "error",
    says: (d: { points: number; unknowns: number }) =>
      `${d.points} points ${d.points > d.unknowns ? "are too few to tell" : "cannot fix"} ${d.unknowns === 1 ? "one unknown" : `${d.unknowns} unknowns`} (parameters, baselines and scales)${d.points > d.unknowns ? " and how well they are known" : ""}`,
    fix: "free fewer parameters, fit more trials at once, or take baseline and scale as known",
    example: { points: 5, unknowns: 6 },
  }),
  "no-start": entry({
    severity: "error",
    says: (d: { tried: number }) => `none of ${d.tried} starting points inside the bounds makes a possible vessel`,
    fix: "check bounds and `requires:`: at the file's own values every volume and flow must be positive and every requirement must hold",
    example: { tried: 64 },
  }),
  "fit-not-converged": entry({
    severity: "warning",
    says: (d: { evaluations: number }) =>
      `the fit did not settle in ${d.evaluations} evaluations; these are the best values found`,
    fix: "start nearer, narrow the bounds, or free fewer parameters",
    example: { evaluations: 2000 },
  }),
  "fit-cancelled": entry({
    severity: "warning",
    says: (d: { evaluations: number }) =>
      `the fit was stopped after ${d.evaluations} evaluations; these are the best values found`,
    fix: "let it run to its end",
    example: { evaluations: 412 },
  }),
  "parameter-at-bound": entry({
    severity: "warning",
    says: (d: { name: string; side: "lower" | "upper"; bound: string }) =>
      `${d.name} ended at its ${d.side} bound, ${d.bound}: the data would take it further`,
    fix: (d) =>
      `widen the bounds of ${d.name} if physics allows, else leave out the part of the network that it describes`,
    example: { name: "bypass", side: "lower", bound: "0 %" },
  }),
  "cannot-tell": entry({
    severity: "warning",
    says: (d: { names: readonly string[] }) =>
      d.names.length === 1
        ? `the data say nothing about ${d.names[0]}: the curve is the same whatever it is`
        : `the data cannot tell ${d.names[0]} from ${joined(d.names.slice(1))}: moved together they leave the curve as it is`,
    fix: (d) =>
      d.names.length === 1
        ? `keep ${d.names[0]} at a known value, or take a reading that it acts on`
        : `keep one of them at a known value, or add a trial at another flow or a reading at another place`,
    example: { names: ["riser", "delay"] },
  }),
  "strongly-correlated": entry({
    severity: "warning",
    says: (d: { a: string; b: string; r: number }) =>
      `${d.a} and ${d.b} can hardly be told apart (correlation ${d.r.toFixed(3).replace("-", "−")})`,
    fix: "add a trial at another flow or a reading at another place, or keep one of the two at a known value",
    example: { a: "corner", b: "renewal", r: -0.994 },
  }),
  "wide-interval": entry({
    severity: "warning",
    says: (d: { name: string }) => `the data leave ${d.name} anywhere between its bounds`,
    fix: (d) => `do not quote ${d.name}; keep it at a known value or measure longer, denser or at another place`,
    example: { name: "renewal" },
  }),
  "interval-not-linear": entry({
    severity: "warning",
    says: (d: { name: string; times: number }) =>
      `the interval of ${d.name} does not hold: at its ends the sum of squares has risen to ${d.times > 100 ? "more than 100" : d.times.toFixed(d.times < 1 ? 2 : 1)} times what linear theory says, as where a front crosses a sample or the curve bends`,
    fix: (d) => `run the fit with --profile, and quote the interval of ${d.name} from there`,
    example: { name: "riser", times: 7.1 },
  }),
  "interval-by-profile": entry({
    severity: "warning",
    says: (d: { name: string; from: string; to: string; linear: readonly [string, string]; step: boolean }) =>
      `by its profile the 95 % interval of ${d.name} is ${d.from} to ${d.to}; the linear one, ${d.linear[0]} to ${d.linear[1]}, does not hold${d.step ? ": the sum of squares jumps at its end, as where a front crosses a sample" : ""}`,
    fix: (d) => `quote the interval of ${d.name} from the profile`,
    example: { name: "riser", from: "145.2 L", to: "154 L", linear: ["134.4 L", "162.8 L"], step: true },
  }),
  "interval-cut": entry({
    severity: "warning",
    says: (d: { name: string; side: "lower" | "upper" | "lower and upper" }) =>
      `the interval of ${d.name} is cut at its ${d.side} bound`,
    fix: (d) => `read the interval of ${d.name} as one-sided, or widen its bounds if physics allows`,
    example: { name: "bypass", side: "lower" },
  }),
  "residuals-correlated": entry({
    severity: "warning",
    says: (d: { strands: readonly { key: string; correlation: number }[]; points: number; effective: number }) =>
      `neighbouring residuals hang together (correlation ${joined(d.strands.map((s) => `${s.correlation.toFixed(2)} in '${s.key}'`))}): ${d.points} points say as much as ${d.effective.toFixed(0)} independent ones`,
    fix: "intervals are widened for it; look for what the model lacks, or for drift and smoothing in the logger",
    example: { strands: [{ key: "Salt pulse/product", correlation: 0.62 }], points: 780, effective: 183 },
  }),
  "trial-contradicted": entry({
    severity: "warning",
    says: (d: { trial: string; key: string; off: number; alone: boolean }) =>
      `${d.alone ? "these values do" : "what fits all trials together does"} not explain '${d.trial}': '${d.key}' is off by ${formatOff(d.off)} times the error that it declares`,
    fix: (d) =>
      d.alone
        ? "look for what the model lacks (another body, another rate law), or for errors that are declared too small"
        : `fit the trials one by one: where their values differ, vessel, kinetics or conditions are not the same in '${d.trial}'; or its errors are declared too small. Predict nothing across the two until that is settled`,
    example: { trial: "Plant analyses", key: "Plant analyses/A at product", off: 10, alone: false },
  }),
  "lack-of-fit": entry({
    severity: "warning",
    says: (d: { times: number; readings: number; p: number }) =>
      `the network misses its readings by ${d.times.toFixed(d.times < 10 ? 1 : 0)} times what repeated readings of one moment differ by (${d.readings} of them; chance ${d.p < 0.001 ? "below 0.001" : d.p.toFixed(3)}): it is not right, or these readings share an error that repeats do not show`,
    fix: "look at the residuals for what it lacks and try a network that has it; intervals hold only as far as the network does",
    example: { times: 3.2, readings: 24, p: 0.0004 },
  }),
  "spreads-differ": entry({
    severity: "warning",
    says: (d: { wide: string; narrow: string; times: number }) =>
      `'${d.wide}' scatters ${d.times.toFixed(0)} times as much as '${d.narrow}', and neither declares its noise: both count the same, so that the coarse one rules the fit`,
    fix: "say how noisy each is: `noise: {floor: …}` under the reading, from its blanks or repeats",
    example: { wide: "Test 1/out", narrow: "Test 2/out", times: 40 },
  }),
  "several-optima": entry({
    severity: "warning",
    says: (d: { others: number }) =>
      `${d.others === 1 ? "another set of values fits" : `${d.others} other sets of values fit`} the data almost as well`,
    fix: "look at the other optima before using the values; another trial or a known value would decide between them",
    example: { others: 1 },
  }),
  "scale-not-positive": entry({
    severity: "warning",
    says: (d: { key: string }) =>
      `the best scale of '${d.key}' is not positive: this reading does not follow the model at all`,
    fix: "check times, injection and place of the reading; `scale: known` if the amount is trusted",
    example: { key: "Salt pulse/product" },
  }),
  "too-many-cells": entry({
    severity: "error",
    says: ({ what, nodes, most, circle }: { what: string; nodes: number; most: number; circle: boolean }) =>
      `${circle ? `${nodes} nodes of the network feed one another` : `the network has ${nodes} nodes`}; this version can ${what} up to ${most}`,
    fix: "flows, volumes and mean times are there at any size (`check`, `verify`); else join cells into fewer",
    example: { what: "compute tracer curves of", nodes: 64_004, most: 20_000, circle: false },
  }),
  "plan-many": entry({
    severity: "error",
    says: (d: { samples: number; most: number }) =>
      `the plan would have ${d.samples} samples a reading; ${d.most} are the most`,
    fix: "take longer steps: what a logger averages between them does not change what the test tells",
    example: { samples: 18_000, most: 2000 },
  }),
  "plan-endless": entry({
    severity: "error",
    says: (_: Record<never, never>) =>
      "nothing tells when this test would be over: no tracer comes through to a reading and is gone",
    fix: 'say how long it may take: `--until "2 h"`',
    example: {},
  }),
  "contents-missing": entry({
    severity: "error",
    says: (_: Record<never, never>) => "nothing enters a closed vessel, and the duty does not say what is in it",
    fix: "add what it holds at the start, such as `contents: {all: {A: 1 mol/L}}`",
    example: {},
  }),
};

/** How many times, as people say it. */
const formatOff = (times: number): string => (times < 10 ? times.toFixed(1) : times.toFixed(0));

function joined(names: readonly string[]): string {
  return names.length < 2 ? (names[0] ?? "") : `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
}
