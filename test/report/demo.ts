import { plotCurves } from "../../src/draw/curves.js";
import { plotFit } from "../../src/draw/fit-curve.js";
import { drawNetwork } from "../../src/draw/network.js";
import { columnWidth } from "../../src/draw/picture.js";
import { plotRegions } from "../../src/draw/regions.js";
import { plotResiduals } from "../../src/draw/residuals.js";
import { sheetTable } from "../../src/draw/sheet-table.js";
import type { StudyReport } from "../../src/report/input.js";
import { sheets } from "../draw/sheets.js";

/** A demo study: every number is invented. */
const time = Array.from({ length: 90 }, (_, k) => k * 4);
const curve = (tau: number): number[] => time.map((t) => (t < 15 ? 0 : 0.05 * Math.exp(-(t - 15) / tau)));
const wiggle = time.map((_, k) => 0.0012 * Math.sin(k * k));
const fitted = curve(76);

/** As the study draws what stands beside another. */
const column = { untitled: true, width: columnWidth };

export const demo: StudyReport = {
  title: "Why does V-3 convert less than designed?",
  answer: [
    {
      about: "What is wrong",
      says: "About 10 % of the feed slips past the bulk to the outlet (95 %: 8 to 12 %); a corner of 200 L hardly exchanges.",
    },
    { about: "What it makes", says: "V-3 now converts 82.3 % of A at normal flow (80.1 to 84.2 %)." },
    { about: "What to do", says: "A baffle would bring 85 % (83 to 87 %), better than today with 96 % probability." },
    {
      about: "Still open",
      says: "The corner's volume and its exchange cannot be told apart; a test of twice the length would settle it.",
    },
  ],
  vessel: {
    name: "vessel",
    drawing: drawNetwork(sheets.v3, { untitled: true }),
    data: { table: sheetTable(sheets.v3) },
    caption: "V-3 with the fitted values. Areas stand for volumes, widths for flows.",
  },
  curves: [
    {
      name: "fit-1",
      ...plotFit(
        {
          title: "Measured and fitted",
          timeUnit: "min",
          value: "tracer, g/L",
          readings: [
            {
              label: "Salt pulse, normal flow, at product",
              source: "v3-salt.csv",
              time,
              measured: fitted.map((v, k) => v + wiggle[k]),
              fitted,
              residual: wiggle,
              marks: [
                { name: "t10", time: 20 },
                { name: "mean", time: 99 },
                { name: "t90", time: 210 },
              ],
              leftOut: [{ time: 312, because: "air in the cell" }],
            },
          ],
        },
        column,
      ),
      caption: "Measured points, the fitted line, and what is left between them.",
    },
    {
      name: "residuals-1",
      ...plotResiduals(
        {
          title: "Residuals",
          timeUnit: "min",
          readings: [
            {
              label: "product",
              time,
              value: wiggle.map((v) => v / 0.0008),
              autocorrelation: [0.4, 0.2, -0.05, 0.03],
            },
          ],
        },
        column,
      ),
      caption: "Weighted residuals and their autocorrelation.",
    },
  ],
  data: [
    {
      trial: "Salt pulse, normal flow",
      at: "product",
      grade: "B",
      clean: false,
      figures: [
        { name: "recovery", estimate: { value: 96.2, unit: "%", low: 92.3, high: 100.1 } },
        { name: "mean", estimate: { value: 95.4, unit: "min", low: 91, high: 99.8 } },
        { name: "t10", estimate: { value: 20.12, unit: "min", low: 19.4, high: 20.9 } },
        { name: "skewness", estimate: { value: undefined, unit: "" } },
      ],
      steps: [
        { name: "calibration", area: 4.93, mean: 88.1, variance: 6021, t10: 20.1 },
        { name: "baseline", area: 4.81, mean: 85.2, variance: 5610, t10: 20.1 },
        { name: "tail", area: 5.01, mean: 95.4, variance: 7890, t10: 20.2 },
      ],
      stepUnits: { area: "g min/L", time: "min" },
    },
  ],
  findings: [
    {
      message: "Part of the feed bypasses the bulk",
      evidence: "early area 9.8 % above the main body, 6 times its error",
      couldBe: "poor mixing at the injection, or clocks that disagree",
      next: "repeat with a diluted slug; sample a second depth",
    },
  ],
  dataRemarks: [
    {
      message: "a large part of the figures comes from the extrapolated tail",
      evidence: "extrapolated: 6 % of the area, 11 % of the mean",
      couldBe: "a test stopped too early",
      next: "measure longer",
    },
  ],
  notSupported: [
    { what: "dead volume", says: ["the mean is within 5 % of volume over flow, and the flow is known to 2 %"] },
  ],
  rivals: [
    { network: "bypass and corner", freeParameters: 4, aicc: -812.4, weight: 0.93, verdict: "leads" },
    { network: "bypass", freeParameters: 2, aicc: -807.2, weight: 0.07, verdict: "misses the tail after 200 min" },
    { network: "corner", freeParameters: 3, aicc: -701.9, weight: 0, verdict: "misses the early peak" },
  ],
  rivalCurves: [
    {
      name: "rivals-1",
      ...plotCurves(
        {
          title: "Rivals",
          x: "time, min",
          y: "tracer, g/L",
          lines: [
            { label: "bypass and corner", x: time, y: fitted },
            { label: "bypass", x: time, y: curve(85) },
            { label: "corner", x: time, y: curve(60) },
          ],
          points: { x: time, y: fitted.map((v, k) => v + wiggle[k]), label: "measured" },
        },
        { ...column, log: true },
      ),
      caption: "Rivals over the same points, the best in full tone.",
    },
  ],
  equals: ["volume and exchange of the corner: only their ratio is seen"],
  parameters: [
    {
      name: "bypass",
      about: "share of the feed that slips to the outlet",
      estimate: { value: 10.04, unit: "%", low: 8.1, high: 12.03 },
    },
    { name: "riser", estimate: { value: 151.3, unit: "L", low: 144.1, high: 158.7 } },
    { name: "renewal", estimate: { value: 1.5, unit: "L/min", low: undefined, high: undefined }, atBound: "lower" },
  ],
  identifiability: {
    says: ["'stagnant' and 'renewal' move together (correlation 0.98)."],
    correlations: [{ one: "stagnant", other: "renewal", value: 0.98 }],
    figures: [
      {
        name: "regions",
        ...plotRegions(
          {
            title: "Pairs",
            freedom: 80,
            pairs: [
              {
                x: { words: "stagnant, L", value: 200, standardError: 12, interval: [176, 224] },
                y: { words: "renewal, L/min", value: 1.5, standardError: 0.2, interval: [1.1, 1.9] },
                correlation: 0.98,
              },
            ],
          },
          column,
        ),
        caption: "Inside the ellipse lies 95 % of what is possible.",
      },
    ],
  },
  residence: [
    {
      name: "exit-age",
      ...plotCurves(
        { title: "Exit ages", x: "time, min", y: "E, 1/min", lines: [{ label: "E", x: time, y: fitted }] },
        column,
      ),
      caption: "Ages of what leaves.",
    },
  ],
  predictions: [
    {
      duty: "Normal production",
      name: "conversion of A",
      estimate: { value: 82.31, unit: "%", low: 80.12, high: 84.23 },
      bounds: { segregated: 83.5, maximumMixedness: 80.9 },
      boundsSay: "half way: mixing matters little",
      drivers: [
        { name: "k2", share: 0.71 },
        { name: "corner", share: 0.2 },
      ],
    },
    {
      duty: "15 % up",
      name: "conversion of A",
      estimate: { value: 79.4, unit: "%", low: 76.9, high: 81.6 },
      bounds: { segregated: 80.4, maximumMixedness: 77.7 },
      drivers: [{ name: "k2", share: 0.68 }],
    },
  ],
  changes: [
    {
      name: "baffle",
      quantity: "conversion of A, normal production",
      estimate: { value: 85.1, unit: "%", low: 83.2, high: 87.1 },
      today: 82.31,
      probabilityBetter: 0.962,
    },
    {
      name: "second tank",
      quantity: "conversion of A, normal production",
      estimate: { value: 90.4, unit: "%", low: 88.9, high: 91.7 },
      today: 82.31,
      probabilityBetter: 0.9994,
      skipped: "not tried for corner",
    },
  ],
  along: [],
  inTime: [],
  decisions: [],
  regulated: [
    {
      about: "Normal production",
      lines: [{ name: "t10 at product", value: "12 min", from: "of the network at this flow", lower: "11 min" }],
    },
  ],
  sweeps: [
    {
      name: "sweep-1",
      ...plotCurves(
        {
          title: "Normal production over feed.flow",
          x: "feed.flow, L/min",
          y: "conversion of A, %",
          free: true,
          lines: [
            {
              label: "conversion of A",
              unnamed: true,
              x: [5, 10, 15],
              y: [88, 82.3, 78],
              band: { low: [87, 80.1, 75], high: [89, 84.2, 80] },
            },
          ],
        },
        column,
      ),
      caption: "Normal production over feed.flow; the band holds 95 % of what is possible.",
    },
  ],
  aims: [
    {
      question: "conversion of A >= 80 % by feed.flow, Normal production",
      says: ["conversion of A >= 80 % where feed.flow is up to 12.5 L/min (looked at 5 L/min to 15 L/min)."],
    },
  ],
  assumptions: ["steady flow during the test", "the tracer follows the liquid"],
  cautions: { heat: true, extrapolated: ["feed 11.5 L/min, tested up to 10 L/min"] },
  tested: ["feed 10 L/min, 21 degC, one salt pulse of 50 g"],
  provenance: {
    files: [
      { path: "v3.yaml", sha256: "9f".repeat(32) },
      { path: "v3-salt.csv", sha256: "1c".repeat(32) },
    ],
    seed: 7,
    version: "0.1.0",
    command: "backmix study v3-study.yaml -o reports/v3",
  },
};
