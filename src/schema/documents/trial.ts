import type { Shape } from "../shape.js";
import { cleaning } from "./cleaning.js";
import {
  choice,
  column,
  csv,
  either,
  heading,
  list,
  name,
  named,
  oneOrMore,
  quantity,
  record,
  text,
} from "./common.js";

const weighted: Shape = named({ is: "quantity", dimension: "ratio" }, "dotted");

const reading: Shape = record({
  at: {
    shape: either(name, weighted),
    says: "Where it is read: an outlet, a compartment (`chain.2` is the second of a chain) or a feed, always in what flows out of it. Several places with shares are a mix of what flows out of them, as a common sample line draws it: `{upper: 60 %, lower: rest}`.",
    required: true,
    example: "product",
  },
  of: {
    shape: name,
    says: "In a trial with a `chemistry`: the species that is read there.",
    example: "A",
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
      counting: {
        says: "Counting statistics of a radioactive tracer: the variance is the counts themselves (Poisson), besides `floor` and `relative`. The column of values must be a rate of counts, such as cps.",
        example: "{over: 1 s, dead-time: 3 us}",
        shape: record({
          over: {
            shape: quantity("time"),
            says: "How long each reading counted.",
            required: true,
            example: "1 s",
          },
          "dead-time": {
            shape: quantity("time"),
            says: "Time for which the detector is blind after each count. Readings are corrected to n / (1 - n d), as a counter does that a count while it is blind does not make blind for longer.",
            default: "0 s",
            example: "3 us",
          },
        }),
      },
    }),
  },
  correlated: {
    says:
      "How errors of neighbouring readings hang together: as exp(-gap / time), a first-order autoregression. Without the key the values of a fit are those of plain least squares, and where its residuals hang together (by AICc, better by more than 2) errors and intervals are what such residuals make them. " +
      "A time, or `fitted`, which finds one, fits by generalised least squares: it follows quick changes more than slow ones, so it is for a logger whose errors are known to wander, not for residuals that show what the vessel lacks. A censored reading parts the ones before from those after. `no` takes residuals as independent, whatever they look like.",
    example: "fitted",
    shape: text,
  },
  limits: {
    says: "Beyond them a reading is censored: known to be at or below, at or above the limit, and no more. `moments` says what that leaves open; a fit counts how likely the model makes it.",
    example: "{below: 0.02 g/L, above: 8 g/L}",
    shape: record({
      below: {
        shape: quantity(),
        says: "The limit of detection, as a concentration or in the unit of the detector.",
        example: "0.02 g/L",
      },
      above: {
        shape: quantity(),
        says: "Where the detector saturates, as a concentration or in the unit of the detector.",
        example: "8 g/L",
      },
    }),
  },
});

const flowLog: Shape = record({
  file: {
    shape: text,
    says: "The log, a CSV file relative to this one.",
    required: true,
    example: "flow.csv",
  },
  time: { ...cleaning.time, required: true },
  value: {
    shape: column("the flows", {
      unit: { shape: text, says: "The unit of the flows in that column.", example: "m3/h" },
    }),
    says: "The column of flows, with its unit. Rows without a value are bridged by a straight line.",
    required: true,
    example: "{column: Q, unit: m3/h}",
  },
  csv,
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
      says: "A measured inlet: a table of what entered, cleaned as a reading is. Its `baseline` is taken from the points before `start` and, for a drift, from the last twentieth. A measured inlet holds what a plant brings round again, too.",
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

const analysis: Shape = record({
  at: {
    shape: name,
    says: "Where it was drawn: an outlet or a compartment, always of what flows out of it.",
    required: true,
    example: "product",
  },
  of: { shape: name, says: "The species.", required: true, example: "A" },
  value: {
    shape: quantity("molar concentration", "mass concentration", "number concentration"),
    says: "The concentration found, with the `±` of the analysis, one standard deviation: a fit weighs it by that.",
    required: true,
    example: "0.12 mol/L ± 0.01 mol/L",
    snippet: "0.12 mol/L ± 0.01 mol/L",
  },
});

const concentrations: Shape = named(quantity("molar concentration", "mass concentration", "number concentration"));

/** One test as declared, of a tracer or of a reaction. */
export const trialShape = record({
  ...heading("trial", "What was tested, and under which conditions.", "Salt pulse, normal flow"),
  vessel: {
    shape: text,
    says: "The network that was tested, relative to this file. It is what `moments` and `check` hold the trial against; a network named by a command or a study comes first.",
    example: "v3.yaml",
  },
  chemistry: {
    shape: text,
    says: "The chemistry that was at work, relative to this file: the trial is then of a reaction, not of a tracer. Its `parameters` are estimated by a `fit` of this trial, together with those of the vessel from tracer trials. Where `vessel` names a closed network (a flask), the trial is of that flask, whatever vessel the command or the study fits.",
    example: "../../shared/chemistry/hydrolysis.yaml",
  },
  temperature: {
    shape: quantity("temperature"),
    says: "With a `chemistry`: the temperature everywhere, held through the trial. It must be given where a rate depends on it. A `±` (in K) makes it an unknown of the fit, held by that.",
    example: "25 degC ± 0.5 K",
    snippet: "25 degC",
  },
  flows: {
    says: "Flows of the day by feed, where they were not those of the network. A `±` makes a flow an unknown of the fit, held by that. A flow that varied stands in a table: straight between its rows, before the first and after the last as there. Volumes are taken as constant; splits by share follow, fixed flows and exchanges stay, unless an expression makes them follow `feed.flow`. Such a trial is followed by the ode engine; figures that need one flow (recovery, space time) use the mean of the log.",
    example: "{feed: 10 L/min ± 2 %}",
    shape: named(either(quantity("flow"), flowLog), "dotted"),
  },
  with: {
    shape: named(quantity(), "dotted"),
    says: "Constants of the network that the day set otherwise, the speed of a stirrer say: numbers, or expressions over names of the network (`half: total / 2`), which have there what the network or the fit gives them.",
    example: "{speed: 90 1/min}",
  },
  conditions: {
    shape: named(text, "names"),
    says: "What else was so on the day, by name and in words that are the same where it was the same: season, wind, who dosed. No curve is worked out from them. Trials of one vessel are held against one another (`fit`, `study`): those that differ in nothing are repeats, those that differ in these alone show whether they matter.",
    example: "{season: winter, wind: calm}",
  },
  feeds: {
    says: "With a `chemistry`: what each feed brought, by species. A species that is not named is not there; `{}` is clean liquid. A `±` makes a concentration an unknown of the fit, held by that.",
    example: "{feed: {A: 1 mol/L ± 1 %, B: 1.2 mol/L}}",
    shape: named(concentrations, "dotted"),
  },
  injection: {
    shape: oneOrMore(injection),
    says: "What was put in, where and when. A list for several injections. There is one, or `contents`, or both.",
    example: "{at: feed, pulse: 50 g ± 1 %}",
  },
  readings: {
    shape: list(reading),
    says: "Every probe or set of samples, each with its table. Without a `file` it is a draft: nothing can be fitted to it. Only a trial with `steady` analyses may be without readings.",
    example: "[{at: product, file: v3-salt.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]",
  },
  steady: {
    says: "With a `chemistry`: analyses of a vessel that had settled, each with its `±`.",
    example: "[{at: product, of: A, value: 0.12 mol/L ± 0.01 mol/L}]",
    shape: list(analysis),
  },
  tracer: {
    says: "What the tracer does that the liquid does not.",
    example: "{half-life: 15 h}",
    shape: record({
      follows: {
        shape: name,
        says: "The substance of the network's `sends` that it divides with, where streams part. Without it the tracer divides as the liquid does.",
        example: "solids",
      },
      "half-life": {
        shape: quantity("time"),
        says: "Radioactive decay, everywhere alike. Amounts and levels are those at `start` of their injection; what is dosed later has decayed till then. `moments` brings readings back to that time.",
        example: "15 h",
      },
      loss: {
        shape: quantity("frequency"),
        says: "Loss of first order inside the vessel: reaction, sunlight, gas lost to the air. `moments` takes it out of the curve of a pulse and says so.",
        example: "0.01 1/h",
      },
      retained: {
        shape: named({ is: "quantity", dimension: "ratio" }, "dotted"),
        says: "Bodies that hold the tracer back, each with its retention: the tracer sees so many times the volume of liquid (1 where it moves with the liquid). A number, or the name of a parameter or constant of the network, which nothing else need use where it is a bare number from 1 on.",
        example: "{packing: 1.4}",
      },
    }),
  },
  contents: {
    says: "With a `chemistry`, what the vessel held at the start, species by place: `{flask: {A: 1 mol/L}}`; a vessel with feeds that it does not name starts with none. Of a tracer: tracer in the vessel at the start, which is time zero (the first row, on a clock): concentrations by compartment, part or member (`chain.2`), evenly spread in each; `all` is what no other name covers. What is not named starts clean. Before the start nothing moves.",
    example: "{corner: 2 g/L}",
    shape: named(either(quantity(), concentrations), "dotted"),
  },
});
