import type { KeyShape, Shape } from "../shape.js";
import { choice, either, heading, list, name, named, oneOrMore, quantity, record, text } from "./common.js";

const species: KeyShape = {
  says: "What reacts, by name. In a rate law the name stands for the concentration at that place and time; capitals are fine. `{}` where there is nothing to say of it.",
  required: true,
  example: "{A: {molar-mass: 88.1 g/mol}, B: {}, P: {}}",
  shape: named(
    record({
      "molar-mass": {
        shape: quantity("molar mass"),
        says: "Molar mass. It is needed where a duty feeds grams and a rate law counts moles, or the other way round.",
        example: "88.1 g/mol",
      },
      about: { shape: text, says: "What it is." },
    }),
  ),
};

const constants: KeyShape = {
  says: "Constants of the rate laws: a value in any unit that makes the rate a concentration per time, or a value at a temperature with an activation energy. They may use one another, parameters, and `T`.",
  example: "{k1: {at: 298.15 K, value: 2 L/mol/min, activation: 45 kJ/mol}, k2: 0.5 1/min}",
  shape: named(
    either(
      quantity(),
      record({
        value: {
          shape: quantity(),
          says: "The value, at the temperature `at` where that is given. A `±` is carried into every prediction.",
          required: true,
          example: "2 L/mol/min",
        },
        at: {
          shape: quantity("temperature"),
          says: "The temperature at which it was measured. With it goes `activation`.",
          example: "298.15 K",
        },
        activation: {
          shape: quantity("molar energy"),
          says: "Activation energy E of the Arrhenius law, k(T) = value * exp(E / R * (1 / at - 1 / T)). With it goes `at`, and the duty must give a temperature.",
          example: "45 kJ/mol",
        },
        heat: {
          shape: quantity("molar energy"),
          says: "For an equilibrium constant, in place of `activation`: the heat of the reaction, negative where it is set free, in van 't Hoff's law K(T) = value * exp(heat / R * (1 / at - 1 / T)).",
          example: "-60 kJ/mol",
        },
        about: { shape: text, says: "What it means, and where it comes from." },
      }),
    ),
  ),
};

const parameters: KeyShape = {
  says: "Constants that a fit may move, by name; everything else uses `value`. A rate law uses them as it uses constants. A fit takes them from trials that carry this chemistry (`chemistry:` in the trial), together with the parameters of the vessel.",
  example: "{k1: {value: 2 L/mol/min, between: [0.02 L/mol/min, 200 L/mol/min], spacing: log}}",
  shape: named(
    record({
      value: {
        shape: quantity(),
        says: "The value where nothing fits it, and one start of a fit. A `±` is a prior of the fit: it holds the value near what is said.",
        required: true,
        example: "2 L/mol/min",
      },
      between: {
        shape: list(quantity(), 2),
        says: "The lowest and the highest value that a fit may try, the lower first: numbers.",
        example: "[0.02 L/mol/min, 200 L/mol/min]",
        snippet: "[0.02 L/mol/min, 200 L/mol/min]",
      },
      spacing: {
        shape: choice("linear", "log"),
        says: "How starts are spread between the bounds: `log` for what may differ by powers of ten.",
        default: "linear",
      },
      about: { shape: text, says: "What it means, for tables and reports." },
    }),
  ),
};

const reaction: Shape = record(
  {
    equation: {
      shape: text,
      says: "The reaction, with whole stoichiometric numbers: `A + 2 B -> P`, or `<->` where it goes both ways (the rate is then that of forward less back).",
      example: "A + B -> P",
      snippet: "A + B -> P",
    },
    makes: {
      shape: named(quantity("ratio")),
      says: "Instead of `equation`: how much of each species one unit of the rate makes, negative where it is used up. Numbers need not be whole.",
      example: "{A: -1, P: 0.8}",
    },
    rate: {
      shape: text,
      says: "The rate law, an expression over species, constants and `T` that comes out as concentration per time; or `mass-action`, which takes the orders from the equation and needs `constant`.",
      required: true,
      example: "k1 * A * B",
    },
    constant: {
      shape: oneOrMore(name),
      says: "For `mass-action` only: the name of the constant, or of both, forward and back, where the equation has `<->`.",
      example: "[k2, k3]",
    },
    heat: {
      shape: quantity("molar energy", "energy per mass"),
      says: "Heat of one unit of the reaction as it is written (of 2 A -> B, for two A), negative where it is set free. It must not depend on the temperature. Where species are counted in grams it is per mass. It counts where a duty balances heat; a reaction without one then neither warms nor cools, which is warned of.",
      example: "-60 kJ/mol",
    },
    about: { shape: text, says: "What it is, and where the rate law comes from." },
  },
  ["equation", "makes"],
);

/** Species, constants and reactions. */
export const chemistryShape = record({
  ...heading("chemistry", "What reacts.", "Consecutive hydrolysis"),
  species,
  constants,
  parameters,
  reactions: {
    shape: list(reaction),
    says: "The reactions, each with its rate law.",
    required: true,
    example: "[{equation: A + B -> P, rate: k1 * A * B}]",
  },
  medium: {
    says: "The liquid, for heat balances. It is one liquid throughout: its heat capacity depends neither on composition nor on temperature.",
    example: "{heat-capacity: 4.1 kJ/L/K}",
    shape: record({
      "heat-capacity": {
        shape: quantity("heat capacity per volume", "heat capacity per mass"),
        says: "Heat capacity, per volume; or per mass, with `density`.",
        required: true,
        example: "4.1 kJ/L/K",
      },
      density: {
        shape: quantity("mass concentration"),
        says: "Density, where the heat capacity is per mass.",
        example: "0.98 kg/L",
      },
    }),
  },
});
