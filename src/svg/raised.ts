import type { Svg } from "./svg.js";

const raisedMarks = new Map([..."⁰¹²³⁴⁵⁶⁷⁸⁹⁻"].map((c, k) => [c, [..."0123456789\u2212"][k]]));

/** Raised signs of which the shipped face lacks some: ⁰ and ⁻. */
const run = /[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]*[⁰⁻][⁰¹²³⁴⁵⁶⁷⁸⁹⁻]*/gu;

/** A drawing whose powers are set as small raised digits, for a renderer with a face that has no signs for them: 10⁻⁵. */
export const withRaisedDigits = (svg: Svg): Svg =>
  svg.replace(/(<text\b[^>]*>)([^<]*)(<\/text>)/gu, (_, open: string, words: string, close: string) => {
    const set = words.replace(run, (marks) => {
      const digits = [...marks].map((c) => raisedMarks.get(c) ?? c).join("");
      return `<tspan baseline-shift="33%" font-size="72%">${digits}</tspan>`;
    });
    return open + set + close;
  });
