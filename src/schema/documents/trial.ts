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
  says: "The column of times: elapsed times with their `unit`, clock times or dates with their `format`. Times as `h:m:s` and ISO dates need neither.",
  example: '{column: Time, format: "h:m:s"}',
  snippet: "{column: t, unit: min}",
  needs: "value",
  shape: column("the times", {
    format: {
      shape: text,
      says: "How clock times are written, from `d M y h m s` and `am` as the file has them: `h:m:s`, `h:m am`, `d.M.y h:m`. Dates need it where day and month could be confused. A clock without dates may pass midnight.",
      example: '"h:m:s"',
    },
  }),
};

const valueColumn: KeyShape = {
  says: "The column of readings, with the unit of the detector. Where there is a `calibration`, or `scale: free`, any word may be that unit.",
  example: '{column: "Cond [mS/cm]", unit: mS/cm}',
  snippet: "{column: c, unit: g/L}",
  shape: column("the readings"),
};

const calibration: KeyShape = {
  says: "From the unit of the detector to a concentration: (reading - blank) / rise * per.",
  example: "{blank: 0.21 mS/cm, rise: 1.9 mS/cm, per: 1 g/L}",
  shape: record({
    blank: {
      shape: quantity(),
      says: "What the detector shows with no tracer, in its own unit.",
      example: "0.21 mS/cm",
      default: "0",
    },
    rise: {
      shape: quantity(),
      says: "By how much the reading rises at the concentration `per`; below zero where it falls.",
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
    says: "The table as it was logged, a CSV file relative to this one. It is never edited: every step of cleaning is declared here.",
    example: "v3-salt.csv",
    snippet: "log.csv",
    needs: "time",
  },
  time: timeColumn,
  value: valueColumn,
  csv,
  calibration,
  baseline: {
    shape: choice("none", "constant", "drift"),
    says: "What lies under the signal: nothing, an offset, or an offset that drifts in a straight line. A fit estimates it beside the parameters; `moments` takes it from before the injection and after the tail.",
    default: "none",
  },
  line: {
    says: "Sample line and detector between the vessel and the reading. They are part of the model, not of the vessel.",
    example: "{delay: 0.3 min, lag: 0.1 min}",
    shape: record({
      delay: {
        shape: quantity("time"),
        says: "Time that the sample travels before it is read. A `±` makes it an unknown of the fit, held by that.",
        example: "0.3 min",
      },
      lag: {
        shape: quantity("time"),
        says: "Time constant of the detector, taken as a first-order lag.",
        example: "0.1 min",
      },
    }),
  },
  "leave-out": {
    says: "Stretches of time whose readings count for nothing, both ends included, each with its reason.",
    example: "[{from: 310 min, to: 320 min, because: air in the cell}]",
    shape: list(
      record({
        from: {
          shape: quantity("time"),
          says: "Start of the stretch: a time as the table writes it, or elapsed since its first row.",
          required: true,
          example: "310 min",
        },
        to: { shape: quantity("time"), says: "End of the stretch, written alike.", required: true, example: "320 min" },
        because: {
          shape: text,
          says: "Why these readings are not believed.",
          required: true,
          example: "air in the cell",
        },
      }),
    ),
  },
};

const weighted: Shape = { is: "later", sort: "map", says: "a reading of a weighted mix of several places" };

const reading: Shape = record({
  at: {
    shape: either(name, weighted),
    says: "Where it is read: an outlet, a compartment (`chain.2` is the second of a chain) or a feed, always in what flows out of it.",
    required: true,
    example: "product",
  },
  ...cleaning,
  scale: {
    shape: choice("known", "free"),
    says: "Is the amount of tracer trusted (`known`), or only the shape of the curve (`free`)? Where it is free a fit estimates a factor, and no recovery is told.",
    default: "known",
  },
  noise: {
    says: "How far a reading may be off, one standard deviation. Without it all readings of one kind of unit share one unknown spread, taken from the residuals.",
    example: "{floor: 0.01 g/L, relative: 1 %}",
    shape: record({
      floor: {
        shape: quantity(),
        says: "The part that does not depend on the value, as a concentration or in the unit of the detector.",
        example: "0.01 g/L",
      },
      relative: {
        shape: quantity("ratio"),
        says: "The part in proportion to the fitted concentration.",
        example: "1 %",
      },
      counting: later("Counting statistics of a radioactive tracer."),
    }),
  },
  limits: later("Beyond them a reading is censored, not believed."),
});

const injection: Shape = record(
  {
    at: {
      shape: name,
      says: "Where the tracer goes in: a feed, or a compartment (at the inlet end of a tube).",
      required: true,
      example: "feed",
    },
    pulse: {
      shape: quantity(),
      says: "The amount put in: g, mol, Bq, or any word where every reading has `scale: free`. A `±` makes it an unknown of the fit, held by that.",
      example: "50 g ± 1 %",
      snippet: "50 g",
    },
    step: {
      says: "The concentration that enters from `start` on, or the dosing rate (`3 g/min`). With `from` and `to` the vessel is in balance with `from` before: a wash-out.",
      example: "{from: 1.5 mg/L, to: 0.2 mg/L}",
      shape: either(
        quantity(),
        record({
          from: {
            shape: quantity(),
            says: "The level before `start`; the whole vessel holds it.",
            required: true,
            example: "1.5 mg/L",
          },
          to: { shape: quantity(), says: "The level from `start` on.", required: true, example: "0.2 mg/L" },
        }),
      ),
    },
    signal: {
      shape: record(cleaning),
      says: "A measured inlet: a table of what entered, cleaned as a reading is. `baseline` and the `lag` of a line are not honoured here yet.",
    },
    start: {
      shape: text,
      says: "When it began: a time as the readings write it, or elapsed since their first row. Without it: at their first row on a clock, else at time zero.",
      example: "09:14:20",
    },
    lasting: {
      shape: quantity("time"),
      says: "How long it took. A pulse is spread evenly over it; a step ends after it (without it, never).",
      default: "0 s",
      example: "2 min",
    },
  },
  ["pulse", "step", "signal"],
);

/** One tracer test as declared. */
export const trialShape = record({
  ...heading("trial", "What was tested, and under which conditions.", "Salt pulse, normal flow"),
  vessel: {
    shape: text,
    says: "The network that was tested, relative to this file. It is what `moments` and `check` hold the trial against; a network named by a command or a study comes first.",
    example: "v3.yaml",
  },
  flows: {
    says: "Flows of the day by feed, where they were not those of the network. A `±` makes a flow an unknown of the fit, held by that.",
    example: "{feed: 10 L/min ± 2 %}",
    shape: named(either(quantity("flow"), { is: "later", sort: "map", says: "a flow logged in a table" }), "dotted"),
  },
  with: {
    shape: named(quantity(), "dotted"),
    says: "Constants of the network that the day set otherwise, the speed of a stirrer say.",
    example: "{speed: 90 1/min}",
  },
  injection: {
    shape: oneOrMore(injection),
    says: "What was put in, where and when. A list for several injections. There is one, or `contents`, or both.",
    example: "{at: feed, pulse: 50 g ± 1 %}",
  },
  readings: {
    shape: list(reading),
    says: "Every probe or set of samples, each with its table. Without a `file` it is a draft: nothing can be fitted to it.",
    required: true,
    example: "[{at: product, file: v3-salt.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]",
  },
  tracer: later("Decay, loss or retention of the tracer."),
  contents: {
    says: "Tracer in the vessel at the start, which is time zero (the first row, on a clock): concentrations by compartment, part or member (`chain.2`), evenly spread in each; `all` is what no other name covers. What is not named starts clean. Before the start nothing moves.",
    example: "{corner: 2 g/L}",
    shape: named(quantity(), "dotted"),
  },
});
