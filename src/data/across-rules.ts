import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { AcrossTrials, Compared, Contrasted } from "./across-trials.js";
import type { Contrast } from "./contrast.js";
import { type Finding, finding } from "./finding.js";
import { thresholds } from "./thresholds.js";

const limit = thresholds.across;

/** What the comparison of several trials says, and what it leaves open. `volume`: the unit of volumes for people. */
export function judgeAcross(
  { contrasts, left }: AcrossTrials,
  volume: Unit | undefined,
): { findings: Finding[]; not: string[] } {
  const findings: Finding[] = [];
  const not = left.map(({ trial, at, why }) => `'${trial.title}' beside the other curves at '${at}': ${why}`);
  for (const c of contrasts) {
    const found = rules[c.contrast](c, volume);
    if (typeof found === "string") not.push(found);
    else findings.push(found);
  }
  return { findings, not };
}

type Rule = (c: Contrasted, volume: Unit | undefined) => Finding | string;

const rules: Readonly<Record<Contrast, Rule>> = {
  repeat: repeatRule,
  dosing: (c) =>
    c.verdict === "open"
      ? openWords(c, "whether it matters how the tracer is put in")
      : finding(
          c.verdict === "differ" ? "steps-disagree" : "dosing-agrees",
          c.at,
          `${differsWords(c)}; ${apartWords(c)}`,
        ),
  conditions(c) {
    if (c.verdict === "differ") return finding("conditions-matter", c.at, `${differsWords(c)}; ${apartWords(c)}`);
    const asked = `an effect of ${differsWords(c)}`;
    return c.verdict === "open" ? openWords(c, asked) : `${asked} at '${c.at}': ${apartWords(c)}`;
  },
  flow: flowRule,
  several(c) {
    const near = c.pairs.every((p) => p.differs.length === 1 && p.flowRatio !== undefined);
    if (near)
      return `whether the curve at '${c.at}' follows the flow: the flows differ by less than ${limit.flowRatio} times`;
    const unknown = c.pairs.some((p) => p.flowRatio === undefined);
    const apart = c.verdict === "differ" ? `they do differ (${apartWords(c)})` : apartWords(c);
    return `what makes curves at '${c.at}' differ: ${unknown ? "a flow is not known" : `${differsWords(c)} changed together`}; ${apart}`;
  },
};

/** Tests under the same conditions: one curve, in the same time, with as much recovered. */
function repeatRule(c: Contrasted, volume: Unit | undefined): Finding | string {
  const rank = { differ: 2, open: 1, coincide: 0 } as const;
  const rankOf = (p: Compared): number => Math.max(rank[p.times], rank[p.amounts]);
  const apart = (p: Compared): number =>
    Math.max(...[p.volumes, p.recoveries].map((v) => (v ? Math.abs(v[0].value / v[1].value - 1) : 0)));
  const worst = c.pairs.reduce((m, p) => ((rankOf(p) - rankOf(m) || apart(p) - apart(m)) > 0 ? p : m));
  const names = worst.trials.map((t) => `'${t.title}'`).join(" and ");
  const figures = `${timesWords(worst, volume)}${recoveryWords(worst)}`;
  const evidence = `${apartWords(c)}${figures === "" ? "" : `; ${names}${figures}`}`;
  if (c.verdict !== "open") return finding(c.verdict === "differ" ? "repeats-differ" : "repeats-agree", c.at, evidence);
  if (c.shape === "open")
    return `${openWords(c, "whether repeated tests agree")}${figures === "" ? "" : `; ${names}${figures}`}`;
  return `whether repeated tests agree at '${c.at}': ${evidence}; that is neither more than noise and what is declared make nor surely less than ${percent(limit.volume)}: more tracer, or more samples`;
}

function timesWords({ volumes }: Compared, unit: Unit | undefined): string {
  if (!volumes) return "";
  if (unit) return `: ${volumeWords({ volumes }, unit).slice(2)}`;
  const [a, b] = volumes.map((v) => v.value);
  return `: flow times mean ${percent(Math.abs(a - b) / Math.max(a, b))} apart`;
}

function recoveryWords({ recoveries, volumes }: Compared): string {
  if (!recoveries) return "";
  const [a, b] = recoveries.map((r) => `${formatNumber(100 * r.value, 4)} ± ${formatNumber(100 * (r.sd ?? 0), 2)} %`);
  return `${volumes ? ", " : ": "}recovered ${a} and ${b}`;
}

function flowRule(c: Contrasted, volume: Unit | undefined): Finding | string {
  if (c.verdict === "open") return openWords(c, "whether the curve scales with the flow");
  const widest = c.pairs.reduce((most, p) => ((p.flowRatio ?? 0) > (most.flowRatio ?? 0) ? p : most), c.pairs[0]);
  const [low, high] = widest.relative;
  const volumes = volumeWords(widest, volume);
  const evidence = `flows ${formatNumber(widest.flowRatio ?? Number.NaN, 3)} times apart; ${apartWords(c)}; variance over squared mean ${formatNumber(low, 3)} at the smaller flow, ${formatNumber(high, 3)} at the larger, ± ${formatNumber(widest.relativeError, 2)}${volumes}`;
  if (c.verdict === "differ") {
    const grows = high - low > limit.sure * widest.relativeError || widest.longer >= limit.sure;
    return finding(grows ? "spread-grows" : "shape-changes", c.at, evidence);
  }
  if (!sameVolume(widest)) return finding("volume-changes", c.at, evidence);
  return finding(c.chance <= limit.chance ? "shape-nearly-scales" : "shape-scales", c.at, evidence);
}

/** Flow times mean, the same as far as its errors and a share that flow meters are off by go. */
function sameVolume({ volumes }: Compared): boolean {
  if (!volumes) return true;
  const [a, b] = volumes;
  const apart = Math.abs(a.value - b.value);
  return apart <= Math.max(limit.sure * Math.hypot(a.sd ?? 0, b.sd ?? 0), limit.volume * Math.max(a.value, b.value));
}

function volumeWords({ volumes }: Pick<Compared, "volumes">, unit: Unit | undefined): string {
  if (!volumes || !unit) return "";
  const [a, b] = volumes.map(
    (v) => `${formatQuantity(v.value, unit, 3)} ± ${formatNumber((v.sd ?? 0) / unit.factor, 2)}`,
  );
  return `; flow times mean ${a} and ${b}`;
}

/** The largest difference of all pairs. */
function apartWords({ pairs, chance, shape }: Contrasted): string {
  const most = pairs.reduce((m, p) => (Math.abs(p.apart.value) > Math.abs(m.apart.value) ? p : m), pairs[0]);
  const { value, age, error } = most.apart;
  const names = most.trials.map((t) => `'${t.title}'`).join(" and ");
  const sure = Math.max(...pairs.map((p) => p.atMost));
  const judged =
    shape === "differ"
      ? `noise makes as much with a chance of ${formatNumber(chance, 1)} at most`
      : `${percent(sure)} at most (95 %)`;
  return `${names} differ most at ${formatNumber(age, 2)} half times, where ${percent(Math.abs(value))} ± ${percent(error)} more has left in ${value > 0 ? "the second" : "the first"}; ${judged}`;
}

const openWords = (c: Contrasted, what: string): string =>
  `${what} at '${c.at}': ${apartWords(c)}; that is neither more than noise and sampling make nor surely less than ${percent(limit.margin)}: more tracer, or more samples`;

const differsWords = ({ pairs }: Contrasted): string => [...new Set(pairs.flatMap((p) => p.differs))].join(", ");

const percent = (x: number): string => `${formatNumber(100 * x, 2)} %`;
