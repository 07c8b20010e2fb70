import type { Shape } from "../shape.js";
import { cleaning } from "./cleaning.js";
import { choice, column, csv, either, heading, list, name, named, quantity, record, text } from "./common.js";

const mixture = quantity("molar concentration", "mass concentration", "number concentration", "temperature");

/** A value that changes in time: by an upset, or as it was logged. */
const course = (level: Shape, what: string, unit: string, from: string, to: string): Shape => ({
  is: "depends",
  on: "file",
  present: record({
    file: {
      shape: text,
      says: "The log of this value, a CSV file relative to this one. Between rows it goes in a straight line; before the first it is as in the first, after the last as in the last.",
      required: true,
      example: "feed-a.csv",
    },
    time: { ...cleaning.time, required: true },
    value: {
      shape: column(what, {
        unit: { shape: text, says: "The unit of the values in that column.", example: unit },
      }),
      says: "The column of values, with its unit. Rows without a value are bridged by a straight line.",
      required: true,
      example: `{column: A, unit: ${unit}}`,
    },
    csv,
  }),
  absent: record({
    from: {
      shape: level,
      says: "What it is before, and after an upset that ends.",
      required: true,
      example: from,
    },
    to: { shape: level, says: "What it jumps to.", required: true, example: to },
    start: { shape: quantity("time"), says: "When, on the clock of the transient.", default: "0 s", example: "10 min" },
    lasting: {
      shape: quantity("time"),
      says: "For how long. Without it the change is for good: a change of grade or, to 0, a shut-down.",
      example: "45 s",
    },
  }),
});

/** One operating point. */
export const dutyShape = record({
  ...heading("duty", "The operating point.", "Normal production, 15 % up"),
  chemistry: {
    shape: text,
    says: "The chemistry file, relative to this file. Without one nothing reacts: pure mixing of what the feeds bring.",
    example: "../../shared/chemistry/hydrolysis.yaml",
  },
  flows: {
    shape: named(
      either(quantity("flow"), course(quantity("flow"), "the flows", "L/min", "10 L/min", "0 L/min")),
      "dotted",
    ),
    says: "Flows by feed, where they are not those of the network. A flow may change in time: `feed: {from: 10 L/min, to: 0 L/min, start: 10 min, lasting: 5 min}` (an upset, a shut-down, a pump that trips), or a logged table; a steady state is then that before the change. Volumes stay as they are, so all flows of the network follow at once, as its streams say; bodies that are passed along, and stays in laminar flow and cascades, go by the volume that has passed. A feed that stops is taken to go on at a thousandth of a millionth of its flow: what stands still has no direction.",
    example: "{feed: 11.5 L/min}",
  },
  with: {
    shape: named(quantity(), "dotted"),
    says: "Constants set otherwise here: those of the chemistry, and constants and parameters of the network.",
    example: "{k2: 0.4 L/mol/min ± 20 %}",
  },
  feeds: {
    says: "What each feed brings: concentrations by species. A species that is not named is not there. Every feed of the network must be named where there is a chemistry; `{}` is clean liquid. `temperature` is that of the feed, which `heat` needs. A concentration, and with `heat` the temperature, may change in time: `A: {from: 1 mol/L, to: 1.3 mol/L, start: 10 min, lasting: 45 s}`, or a logged table; a steady state is then that before the change.",
    example: "{feed: {A: 1 mol/L ± 1 %, B: 1.2 mol/L}}",
    shape: named(
      {
        is: "named",
        each: either(mixture, course(mixture, "the values", "mol/L", "1 mol/L", "1.3 mol/L")),
        keys: "names",
      },
      "dotted",
    ),
  },
  temperature: {
    shape: quantity("temperature"),
    says: "The temperature everywhere (isothermal). It, or `heat`, must be given where a rate depends on it.",
    example: "60 degC",
  },
  report: {
    says: "The figures that count, over all outlets together or, with `at NAME`, at one place: `conversion of A`, `yield of P from A`, `selectivity of P over S`, `log-removal of A`. A concentration (`A at product`), a temperature (`temperature at product`), a time by which so many % of a tracer pulse have left (`t10 at product`) and how long a transient is on one side of a limit (`time A at product above 0.2 mol/L`, `time temperature at product above 80 degC`) are always at one place. Of a transient the others are told as they stand at its end; a time beyond a limit that is still so there has no end.",
    example: "[conversion of A, yield of P from A]",
    shape: list(text),
  },
  local: {
    says: "Constants of the chemistry that hold in some places only (a catalyst, a lamp, an aerator): by the name of a compartment, of a member (`chain.2`) or of a part, whose bodies then all have them. A narrower place counts before a wider one, both before `with`. Pockets react as the body they belong to.",
    example: "{bulk: {k1: 3 L/mol/min}}",
    shape: named(named(quantity()), "dotted"),
  },
  heat: {
    says: "Heat balances in place of one `temperature`: `adiabatic`, or jackets by the name of a compartment, of a member (`chain.2`) or of a part, all else being adiabatic. Every feed then needs its `temperature`, the chemistry the heat capacity of its `medium` and the `heat` of its reactions. Heat goes with the liquid and spreads as it does; walls hold none.",
    example: "{bulk: {jacket: 15 degC, conductance: 40 W/K}}",
    shape: either(
      choice("adiabatic"),
      named(
        record({
          jacket: {
            shape: quantity("temperature"),
            says: "Temperature of what flows in the jacket, the same throughout.",
            required: true,
            example: "15 degC",
          },
          conductance: {
            shape: quantity("heat conductance"),
            says: "Heat that passes per difference of temperature: coefficient times area of the whole jacket. It is spread evenly over the volume, so along a tube, over the members of a row; stagnant pockets have no part of it.",
            required: true,
            example: "40 W/K",
          },
        }),
        "dotted",
      ),
    ),
  },
  "heat-exchange": {
    says: "Feeds that what leaves warms (or cools) before they enter, in counterflow, beside `heat`. A vessel that warms its own feed may have several steady states. In time it passes heat at once, by the flows that there are; beside a flow that changes in time it is refused.",
    example: "[{warms: feed, from: product, effectiveness: 70 %}]",
    needs: "heat",
    shape: list(
      record(
        {
          warms: { shape: name, says: "The feed.", required: true, example: "feed" },
          from: {
            shape: name,
            says: "The outlet whose liquid passes on the other side: all that leaves there.",
            required: true,
            example: "product",
          },
          effectiveness: {
            shape: quantity("ratio"),
            says: "The heat that passes as a share of what could: the smaller of the two flows brought to the other's temperature. Sweeps and aims call it `feed.effectiveness`, after the feed.",
            example: "70 %",
            snippet: "70 %",
          },
          conductance: {
            shape: quantity("heat conductance"),
            says: "Instead of `effectiveness`: coefficient times area of an exchanger in counterflow, which follows the flows. Sweeps and aims call it `feed.conductance`.",
            example: "200 W/K",
          },
        },
        ["effectiveness", "conductance"],
      ),
    ),
  },
  regulated: {
    says: "Figures of a regulator's contact-time method, told in a block of their own and never as a prediction: theoretical detention time (volume over flow), t10, baffling factor, CT and the credit that your own table gives for it. backmix has no such table: what is not declared here is not told.",
    example: "{at: product, residual: 0.8 mg/L, inactivation: {giardia: {log: 3, ct: 131 mg·min/L}}}",
    shape: record({
      at: { shape: name, says: "The outlet that counts.", required: true, example: "product" },
      residual: {
        shape: quantity("mass concentration"),
        says: "The disinfectant left there, as the operator measures it at this flow.",
        example: "0.8 mg/L",
      },
      "baffling-factor": {
        shape: quantity("ratio"),
        says: "The baffling factor that the regulator has assigned; t10 is then this times volume over flow. Without it t10 is that of the network.",
        example: "0.3",
      },
      inactivation: {
        says: "By organism, what the regulator's table asks at the temperature, pH and residual of this duty: so many decades for so much concentration times time. Credit is taken in proportion, as tables of log-linear inactivation are made.",
        example: "{giardia: {log: 3, ct: 131 mg·min/L}}",
        needs: "residual",
        shape: named(
          record({
            log: { shape: quantity("ratio"), says: "Decades that the entry is for.", required: true, example: "3" },
            ct: {
              shape: quantity("contact time"),
              says: "Concentration times time; `131 mg/L * 1 min` where there is no `·` on the keyboard.",
              required: true,
              example: "131 mg·min/L",
            },
          }),
        ),
      },
    }),
  },
  contents: {
    says: "What places hold where a transient starts: concentrations by species, by compartment (its pockets included), member, part, or `all` for every other place; a species that is not named is not there, nor is anything in places under no name. Without `contents` a transient starts in the steady state before the first change of a feed, or, where no feed changes, with clean liquid. With `heat`, `temperature` is that of the place; where it is not given, that of all feeds mixed. A closed vessel (a flask) must have it. Where there are several steady states, they also say which one is meant: that which a vessel that holds `contents` runs to (in circles of up to 200 unknowns), in `simulate`, `sweep`, aims and studies.",
    example: "{bulk: {A: 0.5 mol/L}}",
    shape: named(named(mixture), "dotted"),
  },
});
