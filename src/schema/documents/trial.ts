import type { KeyShape, Shape } from "../shape.js";
import {
  choice,
  column,
  csv,
  either,
  heading,
  later,
  list,
  name,
  named,
  oneOrMore,
  quantity,
  record,
  text,
} from "./common.js";

const timeColumn: KeyShape = {
  says: "The column of times, with their unit, or with the format of clock times.",
  example: '{column: Time, format: "h:m:s"}',
  shape: column("the times", {
    format: {
      shape: text,
      says: "How clock times are written: `h:m:s`, `h:m`, with `am/pm`, with a date before them. Dates need it where day and month could be confused.",
      example: '"h:m:s"',
    },
  }),
};

const valueColumn: KeyShape = {
  says: "The column of readings, with the detector's unit.",
  example: '{column: "Cond [mS/cm]", unit: mS/cm}',
  shape: column("the readings"),
};

const calibration: KeyShape = {
  says: "From the detector's unit to a concentration: (reading - blank) / rise * per.",
  example: "{blank: 0.21 mS/cm, rise: 1.9 mS/cm, per: 1 g/L}",
  shape: record({
    blank: { shape: quantity(), says: "What the detector shows with no tracer.", example: "0.21 mS/cm", default: "0" },
    rise: {
      shape: quantity(),
      says: "By how much it rises at the concentration `per`.",
      required: true,
      example: "1.9 mS/cm",
    },
    per: {
      shape: quantity(),
      says: "The concentration that makes it rise by `rise`.",
      required: true,
      example: "1 g/L",
    },
    points: later("A calibration curve from a table."),
    temperature: later("Compensation for the temperature of the sample."),
  }),
};

/** A table over time with every cleaning key: a reading, or a measured inlet. */
const cleaning: Record<string, KeyShape> = {
  file: {
    shape: text,
    says: "The table as it was logged, relative to this file. It is never edited: cleaning is declared here.",
    example: "v3-salt.csv",
  },
  time: timeColumn,
  value: valueColumn,
  csv,
  calibration,
  baseline: {
    shape: choice("none", "constant", "drift"),
    says: "What is under the signal: nothing, an offset, or an offset that drifts. Fitted as linear nuisance terms.",
    default: "none",
  },
  line: {
    says: "Sample line and detector between the vessel and the reading.",
    example: "{delay: 0.3 min, lag: 0.1 min}",
    shape: record({
      delay: { shape: quantity("time"), says: "Time that the sample travels before it is read.", example: "0.3 min" },
      lag: { shape: quantity("time"), says: "First-order lag of the detector.", example: "0.1 min" },
    }),
  },
  "leave-out": {
    says: "Stretches of time that count for nothing, each with its reason.",
    example: "[{from: 310 min, to: 320 min, because: air in the cell}]",
    shape: list(
      record({
        from: {
          shape: quantity("time"),
          says: "Start of the stretch, in the time of the readings.",
          required: true,
          example: "310 min",
        },
        to: { shape: quantity("time"), says: "Its end.", required: true, example: "320 min" },
        because: { shape: text, says: "Why.", required: true, example: "air in the cell" },
      }),
    ),
  },
};

const weighted: Shape = { is: "later", sort: "map", says: "a reading of a weighted mix of several places" };

const reading: Shape = record({
  at: {
    shape: either(name, weighted),
    says: "Where it is read: an outlet, a compartment or a feed, seen at its outflow.",
    required: true,
    example: "product",
  },
  ...cleaning,
  scale: {
    shape: choice("known", "free"),
    says: "Is the amount of tracer trusted, or only the shape of the curve?",
    default: "known",
  },
  noise: {
    says: "How far a reading may be off, one standard deviation. Without it each reading has one unknown spread.",
    example: "{floor: 0.01 g/L, relative: 1 %}",
    shape: record({
      floor: {
        shape: quantity(),
        says: "The part that does not depend on the value, in the tracer's or the detector's unit.",
        example: "0.01 g/L",
      },
      relative: { shape: quantity("ratio"), says: "The part in proportion to the value.", example: "1 %" },
      counting: later("Counting statistics of a radioactive tracer."),
    }),
  },
  limits: later("Beyond them a reading is censored, not believed."),
});

const injection: Shape = record(
  {
    at: { shape: name, says: "A feed, or a compartment (a tube's inlet end).", required: true, example: "feed" },
    pulse: {
      shape: quantity(),
      says: "The amount put in: g, mol, Bq, or any word where every reading has `scale: free`.",
      example: "50 g ± 1 %",
    },
    step: {
      says: "The concentration, or the dosing rate, from `start` on. With `from` the vessel starts in balance with that.",
      example: "{from: 1.5 mg/L, to: 0.2 mg/L}",
      shape: either(
        quantity(),
        record({
          from: { shape: quantity(), says: "The level before.", required: true, example: "1.5 mg/L" },
          to: { shape: quantity(), says: "The level after.", required: true, example: "0.2 mg/L" },
        }),
      ),
    },
    signal: { shape: record(cleaning), says: "A measured inlet: a table with every cleaning key of a reading." },
    start: {
      shape: text,
      says: "When it began: a time as the readings write it, or an elapsed time.",
      example: "09:14:20",
    },
    lasting: { shape: quantity("time"), says: "How long it took.", default: "0 s", example: "2 min" },
  },
  ["pulse", "step", "signal"],
);

/** One tracer test as declared. */
export const trialShape: Shape = record({
  ...heading("trial", "What was tested, and under which conditions.", "Salt pulse, normal flow"),
  vessel: {
    shape: text,
    says: "The network that was tested, relative to this file. A network named by the command or the study comes first.",
    example: "v3.yaml",
  },
  flows: {
    says: "Flows of the day by feed, where they were not the network's.",
    example: "{feed: 10 L/min ± 2 %}",
    shape: named(either(quantity("flow"), { is: "later", sort: "map", says: "a flow logged in a table" }), "dotted"),
  },
  with: {
    shape: named(quantity(), "dotted"),
    says: "Constants that the day set otherwise. Expressions may use parameters.",
    example: "{speed: 90 1/min}",
  },
  injection: {
    shape: oneOrMore(injection),
    says: "What was put in, where and when. A list for several.",
    required: true,
    example: "{at: feed, pulse: 50 g ± 1 %}",
  },
  readings: {
    shape: list(reading),
    says: "Every probe or set of samples. Without a `file` it is a draft, to be planned.",
    required: true,
  },
  tracer: later("Decay, loss or retention of the tracer."),
  contents: later("Tracer inside at the start."),
});
