import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { type Finding, finding } from "./finding.js";
import type { Shape } from "./shape.js";
import { thresholds as limit } from "./thresholds.js";

const percent = (x: number): string => `${formatNumber(100 * x, 2)} %`;
const number = (x: number): string => formatNumber(x, 3);

/** What one rule made of a curve: its evidence, or in words why nothing speaks for it; undefined where it cannot be asked. */
type Verdict = { readonly evidence: string } | { readonly not: string } | undefined;

interface ShapeRule {
  readonly code: Finding["code"];
  readonly look: (shape: Shape, time: Unit) => Verdict;
}

/** Main line of ln W, where it is straight. */
const straight = ({ main }: Shape): Shape["main"] => (main && main.scatter <= limit.straight ? main : undefined);

const isSlow = ({ main, late }: Shape): boolean =>
  main !== undefined && late !== undefined && late.rate < limit.slowRatio * main.rate && late.scatter < 0.3;

const spacings = ({ peaks }: Shape): number[] => peaks.slice(1).map((p, i) => p.time - peaks[i].time);

/** Three peaks or more, evenly apart, each lower than the one before. */
function isLoop(shape: Shape): boolean {
  const gaps = spacings(shape);
  if (gaps.length < 2) return false;
  const mean = gaps.reduce((a, b) => a + b, 0) / gaps.length;
  const falls = shape.peaks.every((p, i) => i === 0 || p.height < shape.peaks[i - 1].height);
  return falls && gaps.every((g) => Math.abs(g - mean) <= limit.even * mean);
}

/** An early peak apart from the main one. */
const earlyPeak = ({ peaks, mean }: Shape) => (peaks.length > 1 && peaks[0].time < 0.25 * mean ? peaks[0] : undefined);

const rules: readonly ShapeRule[] = [
  {
    code: "bypass",
    look: (s, time) => {
      const early = earlyPeak(s);
      const whole = s.peaks.reduce((sum, p) => sum + p.area, 0);
      if (early && !isLoop(s))
        return {
          evidence: `a peak of its own ${early.time > 0 ? `at ${formatQuantity(early.time, time, 3)}` : "already while the tracer went in"}, ${percent(early.area / whole)} of the area`,
        };
      const line = straight(s);
      if (!line || isSlow(s)) return undefined;
      const short = 1 - line.intercept;
      const sure = short > limit.sure * line.interceptError && short > limit.bypassLeast;
      return sure
        ? {
            evidence: `ln W is straight and meets the injection at ${number(line.intercept)} ± ${formatNumber(line.interceptError, 2)}: about ${percent(short)} of the flow came at once`,
          }
        : {
            not: `bypass: with one, the decay drawn back to the injection would begin well below the whole of the tracer; it begins at ${number(line.intercept)} ± ${formatNumber(line.interceptError, 2)} of it`,
          };
    },
  },
  {
    code: "slow-exchange",
    look: ({ main, late, ...s }) => {
      if (!main) return undefined;
      if (!late) return { not: "slow exchange: too little of the tracer was followed to its end to tell" };
      if (!isSlow({ main, late, ...s }))
        return {
          not: `slow exchange: with a quiet zone, the late decay would be less than ${number(limit.slowRatio)} times as fast as the early one; it is ${number(late.rate / main.rate)} times as fast`,
        };
      return {
        evidence: `the late decay is ${number(late.rate / main.rate)} times the early one; its line meets the injection at ${percent(Math.min(1, late.intercept))} of the tracer`,
      };
    },
  },
  {
    code: "intensity-falls",
    look: ({ intensity }) => {
      if (intensity.length < 3) return undefined;
      const pairs = intensity.flatMap((high, i) => intensity.slice(i + 1).map((low) => ({ high, low })));
      const fallOf = ({ high, low }: (typeof pairs)[number]): number => (high.value - low.value) / high.value;
      const worst = pairs.reduce((best, p) => (fallOf(p) > fallOf(best) ? p : best), pairs[0]);
      const fall = fallOf(worst);
      if (!(fall > 0))
        return {
          not: "stagnancy: with liquid held back, what has stayed longer would leave less readily; it never does",
        };
      const { high, low } = worst;
      const sure = high.value - low.value > limit.sure * Math.hypot(high.error, low.error);
      const words = `falls to ${percent(1 - fall)} of what it was`;
      return sure && fall > limit.intensityFall
        ? { evidence: `it ${words}` }
        : {
            not: `stagnancy: with liquid held back, what has stayed longer would leave less readily (the escape intensity would fall); it ${words} at most`,
          };
    },
  },
  {
    code: "loop",
    look: (s, time) => {
      if (!isLoop(s))
        return s.peaks.length > 0
          ? {
              not: `a loop inside: the tracer would come by again and again, in peaks evenly apart and each lower; there ${s.peaks.length === 1 ? "is one peak" : `are ${s.peaks.length} peaks that are no such echoes`}`,
            }
          : undefined;
      const gaps = spacings(s);
      const ratio = s.peaks[1].height / s.peaks[0].height;
      const gap = gaps.reduce((a, b) => a + b, 0) / gaps.length;
      return {
        evidence: `${s.peaks.length} peaks ${formatQuantity(gap, time, 3)} apart, each about ${number(ratio)} times the one before`,
      };
    },
  },
  {
    code: "parallel-paths",
    look: (s, time) => {
      if (s.peaks.length < 2 || isLoop(s) || earlyPeak(s)) return undefined;
      const whole = s.peaks.reduce((sum, p) => sum + p.area, 0);
      const list = s.peaks.map((p) => `${percent(p.area / whole)} at ${formatQuantity(p.time, time, 3)}`).join(", ");
      return { evidence: list };
    },
  },
  {
    code: "tube-then-tank",
    look: (s, time) => {
      const line = straight(s);
      if (!line || isSlow(s)) return undefined;
      const delay = Math.log(line.intercept) / line.rate;
      const lag = line.interceptError / line.intercept / line.rate;
      const share = delay / s.mean;
      const steep = s.mode - s.first < 0.15 * s.mean && Math.abs(s.first - delay) < 0.15 * s.mean;
      if (!(delay > limit.sure * lag) || share < limit.delayLeast)
        return {
          not: `a delay: with a tube before the tank, the decay drawn back to the injection would begin well above the whole of the tracer; it begins at ${number(line.intercept)} ± ${formatNumber(line.interceptError, 2)} of it`,
        };
      return steep
        ? {
            evidence: `delay ${formatQuantity(delay, time, 3)} ± ${formatQuantity(lag, time, 2)}, ${percent(share)} of the mean, then a straight decay`,
          }
        : undefined;
    },
  },
  {
    code: "near-plug",
    look: ({ width, widthError, mode, mean }) => {
      if (width === undefined) return undefined;
      const words = `half the time from 16 to 84 % is ${number(width)} ± ${formatNumber(widthError, 2)} of the middle time`;
      return width + 2 * widthError < limit.plug && Math.abs(mode - mean) < 0.25 * mean
        ? { evidence: `${words}: as about ${formatNumber(1 / width ** 2, 2)} tanks in a row` }
        : {
            not: `near plug flow: the tracer would leave close together, within ${percent(limit.plug)} of the middle time; ${words}`,
          };
    },
  },
  {
    code: "well-mixed",
    look: (s) => {
      const line = straight(s);
      const [low, high] = limit.mixed;
      if (!line)
        return {
          not: "one well-mixed volume: what is left would decay in one straight line of logarithms; it does not",
        };
      const off = Math.abs(line.intercept - 1);
      const mixed =
        s.mode < limit.atOnce * s.mean &&
        off < Math.max(limit.sure * line.interceptError, limit.delayLeast) &&
        off < 0.1 &&
        !isSlow(s) &&
        s.relative > low &&
        s.relative < high;
      return mixed
        ? {
            evidence: `highest at ${percent(s.mode / s.mean)} of the mean, ln W straight from ${number(line.intercept)}, variance over squared mean ${number(s.relative)}`,
          }
        : {
            not: `one well-mixed volume: the tracer would be highest at once and decay in one straight line of logarithms from the whole of it, with a variance equal to the mean squared; it was highest at ${percent(s.mode / s.mean)} of the mean time, its line begins at ${number(line.intercept)}, and its variance is ${number(s.relative)} times the mean squared`,
          };
    },
  },
];

/** The findings that tell of a shape, and not of the data's worth. */
export const shapeCodes: ReadonlySet<string> = new Set(rules.map((r) => r.code));

/** All shapes that a curve shows, and in words those that were looked for and are not there. */
export function judgeShape(shape: Shape, time: Unit): { findings: Finding[]; not: string[] } {
  const findings: Finding[] = [];
  const not: string[] = [];
  for (const { code, look } of rules) {
    const verdict = look(shape, time);
    if (!verdict) continue;
    if ("not" in verdict) not.push(`${verdict.not} (at '${shape.at}')`);
    else findings.push(finding(code, shape.at, verdict.evidence));
  }
  return { findings, not };
}
