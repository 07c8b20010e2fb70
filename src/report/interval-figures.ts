import { plotBars } from "../draw/bars.js";
import { type IntervalRow, plotIntervals } from "../draw/intervals.js";
import { columnWidth } from "../draw/picture.js";
import { chance, figureLine, inBrackets } from "./digits.js";
import type { Change, Figure, Prediction, StudyReport } from "./input.js";
import { grouped } from "./sections/rows.js";

/** Beside another on the page. */
const column = { untitled: true, width: columnWidth };

/** What the vessel makes: a drawing for each quantity, a row for each duty. */
export const predictionFigures = ({ predictions }: StudyReport): Figure[] =>
  grouped(predictions, (p) => `${p.name}, ${p.estimate.unit}`).flatMap(([quantity, list], k): Figure[] => {
    const intervals = { title: quantity, quantity, rows: list.flatMap(predictionRow) };
    if (intervals.rows.length === 0) return [];
    const figure: Figure = {
      name: `prediction-${k + 1}`,
      ...plotIntervals(intervals, column),
      caption: list.some((p) => p.bounds)
        ? `${capital(inBrackets(quantity))}: value, 95 % interval, and where full segregation and maximum mixedness would put it.`
        : `${capital(inBrackets(quantity))}: value and 95 % interval.`,
    };
    return [figure];
  });

function predictionRow(p: Prediction): readonly IntervalRow[] {
  const { value, low, high } = p.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  // What has no end has no place on an axis: the table tells it.
  if (![value, low, high].every(Number.isFinite)) return [];
  const text = figureLine(p.name, p.estimate);
  return [{ label: p.duty, value, low, high, text, ...(p.bounds ? { bounds: p.bounds } : {}) }];
}

/** A sentence begins with a capital; a symbol (t10) stays as it is. */
const capital = (words: string): string =>
  /^\p{L}\d/u.test(words) ? words : words.charAt(0).toUpperCase() + words.slice(1);

const mostSpreads = 2;
const mostDrivers = 6;

/** What to measure better to narrow an interval: one picture each for the first predictions that have several inputs. */
export function spreadFigures({ predictions }: StudyReport): Figure[] {
  const told = predictions.filter((p) => (p.drivers?.length ?? 0) > 1).slice(0, mostSpreads);
  return told.map((p, k) => {
    const title = `${p.duty}: what holds the uncertainty of ${p.name}`;
    const rows = (p.drivers ?? []).slice(0, mostDrivers).map((d) => ({ label: d.name, percent: 100 * d.share }));
    const says = p.spreadSays === undefined ? "" : `: ${p.spreadSays}`;
    const how = p.spreadMethod === undefined ? "" : ` (${p.spreadMethod})`;
    return {
      name: `spread-${k + 1}`,
      ...plotBars({ title, quantity: "share of the variance, %", rows }, column),
      caption: `${title}${says}${how}.`,
    };
  });
}

/** What each change would bring: a drawing for each quantity, a row for each change, today's value across. */
export const changeFigures = ({ changes }: StudyReport): Figure[] =>
  grouped(changes, (c) => `${c.quantity}, ${c.estimate.unit}`).map(([quantity, list], k) => {
    const reference = { value: list[0].today, label: "today" };
    const intervals = { title: quantity, quantity, rows: list.flatMap(changeRow), reference };
    return {
      name: `change-${k + 1}`,
      ...plotIntervals(intervals, column),
      caption: `${capital(inBrackets(quantity))} after each change, beside today's.`,
    };
  });

function changeRow(c: Change): readonly IntervalRow[] {
  const { value, low, high } = c.estimate;
  if (value === undefined || low === undefined || high === undefined) return [];
  return [
    {
      label: c.name,
      value,
      low,
      high,
      text: figureLine(c.name, c.estimate),
      under: `better than today: ${chance(c.probabilityBetter)}`,
    },
  ];
}
