import type { Shape } from "../shape.js";
import { choice, either, heading, later, list, named, quantity, record, text } from "./common.js";

const upset: Shape = { is: "later", sort: "map", says: "a feed value that changes in time" };

/** One operating point. */
export const dutyShape = record({
  ...heading("duty", "The operating point.", "Normal production, 15 % up"),
  chemistry: {
    shape: text,
    says: "The chemistry file, relative to this file. Without one nothing reacts: pure mixing of what the feeds bring.",
    example: "../../shared/chemistry/hydrolysis.yaml",
  },
  flows: {
    shape: named(either(quantity("flow"), upset), "dotted"),
    says: "Flows by feed, where they are not those of the network.",
    example: "{feed: 11.5 L/min}",
  },
  with: {
    shape: named(quantity(), "dotted"),
    says: "Constants set otherwise here: those of the chemistry, and constants and parameters of the network.",
    example: "{k2: 0.4 L/mol/min ± 20 %}",
  },
  feeds: {
    says: "What each feed brings: concentrations by species. A species that is not named is not there. Every feed of the network must be named where there is a chemistry; `{}` is clean liquid. `temperature` is that of the feed, which `heat` needs.",
    example: "{feed: {A: 1 mol/L ± 1 %, B: 1.2 mol/L}}",
    shape: named(
      {
        is: "named",
        each: either(
          quantity("molar concentration", "mass concentration", "number concentration", "temperature"),
          upset,
        ),
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
    says: "The figures that count, over all outlets together or, with `at NAME`, at one place: `conversion of A`, `yield of P from A`, `selectivity of P over S`, `log-removal of A`. A concentration (`A at product`), a temperature (`temperature at product`) and a time by which so many % of a tracer pulse have left (`t10 at product`) are always at one place.",
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
  contents: later("Where a transient starts."),
});
