import type { KeyShape, Shape } from "../shape.js";
import { either, heading, later, list, name, named, oneOrMore, quantity, record, text } from "./common.js";

const species: KeyShape = {
  says: "What reacts, by name. A rate law uses the names as concentrations.",
  required: true,
  example: "{A: {molar-mass: 88.1 g/mol}, B: {}, P: {}}",
  shape: named(
    record({
      "molar-mass": {
        shape: quantity("molar mass"),
        says: "Molar mass, where amounts are given in grams.",
        example: "88.1 g/mol",
      },
      about: { shape: text, says: "What it is." },
    }),
  ),
};

const constants: KeyShape = {
  says: "Constants of the rate laws: a value, or a value at a temperature with an activation energy.",
  example: "{k1: {at: 298.15 K, value: 2 L/mol/min, activation: 45 kJ/mol}, k2: 0.5 1/min}",
  shape: named(
    either(
      quantity(),
      record({
        value: {
          shape: quantity(),
          says: "The value, at the temperature `at` where that is given.",
          required: true,
          example: "2 L/mol/min",
        },
        at: { shape: quantity("temperature"), says: "The temperature at which it was measured.", example: "298.15 K" },
        activation: {
          shape: quantity("molar energy"),
          says: "Activation energy of the Arrhenius law.",
          example: "45 kJ/mol",
        },
        about: { shape: text, says: "What it means, and where it comes from." },
      }),
    ),
  ),
};

const reaction: Shape = record(
  {
    equation: {
      shape: text,
      says: "The reaction, with whole stoichiometric numbers: `A + 2 B -> P`, or `<->` where it goes both ways.",
      example: "A + B -> P",
    },
    makes: {
      shape: named(quantity("ratio")),
      says: "Instead of `equation`: made per unit of reaction, negative where used up. Numbers need not be whole.",
      example: "{A: -1, P: 0.8}",
    },
    rate: {
      shape: text,
      says: "The rate law, an expression over species, constants and `T`; or `mass-action` with `constant`.",
      required: true,
      example: "k1 * A * B",
    },
    constant: {
      shape: oneOrMore(name),
      says: "For `mass-action`: the name of the constant, or of both, forward and back.",
      example: "[k2, k3]",
    },
    heat: later("Heat of reaction, exothermic negative."),
    about: { shape: text, says: "What it is, and where the rate law comes from." },
  },
  ["equation", "makes"],
);

/** Species, constants and reactions. */
export const chemistryShape: Shape = record({
  ...heading("chemistry", "What reacts.", "Consecutive hydrolysis"),
  species,
  constants,
  reactions: {
    shape: list(reaction),
    says: "The reactions, each with its rate law.",
    required: true,
    example: "[{equation: A + B -> P, rate: k1 * A * B}]",
  },
  medium: later("Heat capacity of the liquid."),
});
