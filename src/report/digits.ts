import { typeset } from "../draw/scale.js";
import { formatNumber } from "../units/format.js";
import type { Estimate } from "./input.js";

/** As many decimals as a half-width supports: two significant digits of it up to 29, one above. */
function decimalsFor(halfWidth: number): number {
  const exponent = Math.floor(Math.log10(halfWidth));
  const leading = halfWidth / 10 ** exponent;
  return -exponent + (leading < 2.95 ? 1 : 0);
}

/** A number at so many decimals; negative decimals round to tens and hundreds. A proper minus; powers of ten where long. */
export function atDecimals(x: number, decimals: number): string {
  if (!Number.isFinite(x)) return formatNumber(x);
  const size = Math.abs(x);
  if (size >= 1e6 || decimals > 5) return scientific(x, decimals);
  const unit = 10 ** -decimals;
  const words = decimals > 0 ? size.toFixed(decimals) : String(Math.round(size / unit) * unit);
  return x < 0 && Number(words) !== 0 ? `\u2212${words}` : words;
}

/** In place of an interval, where no file and no fit gives one: both ends are the value. */
export const noSpread = "no ± given";

/** "82.3 (80.1 to 84.2)" with the digits that the interval supports; three digits where none is given or NaN says that there is none. */
export function estimateWords({ value, low, high }: Estimate): { readonly value: string; readonly interval: string } {
  if (value === undefined || Number.isNaN(value)) return { value: "not estimable", interval: "" };
  if (low === undefined || high === undefined) return { value: formatNumber(value, 3), interval: "" };
  if (!Number.isFinite(high - low)) {
    return { value: formatNumber(value, 3), interval: "not estimable" };
  }
  const half = (high - low) / 2;
  if (!(half > 0)) return { value: formatNumber(value, 4), interval: noSpread };
  const decimals = decimalsFor(half);
  return {
    value: atDecimals(value, decimals),
    interval: `${atDecimals(low, decimals)} to ${atDecimals(high, decimals)}`,
  };
}

/** In one line with its unit: "82.3 % (80.1 to 84.2)". */
export function estimateLine(estimate: Estimate): string {
  const { value, interval } = estimateWords(estimate);
  const withUnit =
    value === "not estimable" || estimate.unit === "" ? value : `${value}\u2009${typeset(estimate.unit)}`;
  return interval === "" || interval === noSpread ? withUnit : `${withUnit} (${interval})`;
}

/** The same of a figure of a duty: a time beyond a limit without an end is told in words. */
export const figureLine = (name: string, estimate: Estimate): string =>
  /^time /.test(name) && estimate.value === Number.POSITIVE_INFINITY
    ? "for good (still so when the duty is over)"
    : estimateLine(estimate);

/** "conversion of A, %" as "conversion of A [%]", for use inside a sentence. */
export const inBrackets = (quantity: string): string =>
  quantity.replace(/, ([^,]*)$/, (_, unit: string) => (unit === "" ? "" : ` [${unit}]`));

/** A probability without more certainty than there is: 88 %, above 99 %, below 1 %. */
export function chance(p: number): string {
  if (!Number.isFinite(p)) return "unknown";
  const percent = Math.round(p * 100);
  if (p > 0.995) return "above 99\u2009%";
  if (p < 0.005) return "below 1\u2009%";
  return `${percent}\u2009%`;
}

/** 1.23×10⁻⁶, with as many digits as the decimals leave. */
function scientific(x: number, decimals: number): string {
  if (x === 0) return "0";
  const exponent = Math.floor(Math.log10(Math.abs(x)));
  const mantissa = (Math.abs(x) / 10 ** exponent).toFixed(Math.min(15, Math.max(0, exponent + decimals)));
  const raised = [...String(exponent)].map((c) => superscripts[c]).join("");
  return `${x < 0 ? "\u2212" : ""}${mantissa}\u00d710${raised}`;
}

const superscripts: Readonly<Record<string, string>> = Object.fromEntries(
  [..."0123456789-"].map((c, k) => [c, [..."⁰¹²³⁴⁵⁶⁷⁸⁹⁻"][k]]),
);
