import type { KeyShape, RecordShape, Shape, VariantShape } from "../shape.js";
import { choice, either, heading, list, name, named, quantity, record, text } from "./common.js";
import { orVariant } from "./variant.js";

/** What the schema needs to know of a kind of compartment; the kinds table has more. */
export interface KindKeys {
  readonly says: string;
  readonly keys: Readonly<Record<string, KeyShape>>;
  readonly flows: boolean;
  readonly exchanges: boolean;
  /** May a species divide otherwise than the liquid where its outflow splits? */
  readonly sends?: boolean;
}

const to: KeyShape = {
  says: "Where the outflow goes: one name takes all of it; a map splits it by shares of the outflow (`30 %`), fixed flows (`4 L/min`) and at most one `rest`. Without `rest` shares add to 100 %; with a fixed flow there must be a `rest`. A stream to a place upstream is a recycle, one that skips ahead a bypass.",
  required: true,
  example: "{loop: 4 L/min, product: rest}",
  snippet: "product",
  shape: either(name, named(quantity("ratio", "flow"), "dotted")),
};

const exchange: KeyShape = {
  says: "Other single stirred tanks and the flow exchanged with each, equal both ways, so that volumes stay. Written on one side only.",
  example: "{corner: 1.5 L/min}",
  shape: named(quantity("flow"), "dotted"),
};

const sends: KeyShape = {
  says: "Substances that divide otherwise than the liquid where the outflow splits (a thickener, a membrane, a screen), by name: the share of each that every stream of `to` takes, at most one `rest`; what is not named there gets none. It is carried along by the liquid everywhere else. A trial follows such a substance with `tracer: {follows: solids}`; what no name follows divides as the liquid does.",
  example: "{solids: {sludge: 98 %, effluent: rest}}",
  shape: named(named(quantity("ratio"), "dotted")),
};

/** `sends` on a body that is no place where streams are parted. */
const noSends = (kind: string): KeyShape => ({
  shape: text,
  says: "Not on this kind of body.",
  elsewhere: {
    says: `\`sends\` is for stirred tanks and junctions, not for a body of \`kind: ${kind}\``,
    fix: "send its outflow to a `kind: junction` and let that part the substances",
  },
});

/** `exchange` on a body that has no one well-mixed place to exchange with. */
const noExchange = (kind: string, stagnant: boolean): KeyShape => ({
  shape: text,
  says: "Not on this kind of body.",
  elsewhere: {
    says: `\`exchange\` is for single stirred tanks, not for a body of \`kind: ${kind}\``,
    fix: stagnant
      ? "write what exchanges with the flow along the body as `stagnant: {volume: 20 L, exchange: 1 L/min}`"
      : "give the exchange to a body of `kind: stirred` before or behind it",
  },
});

function kindRecord(name: string, kind: KindKeys): VariantShape {
  const keys: Record<string, KeyShape> = {
    kind: { shape: text, says: "What sort of body this is.", required: true },
    ...kind.keys,
  };
  if (kind.flows && !kind.keys.to) keys.to = kind.exchanges ? { ...to, required: false } : to;
  if (kind.exchanges) keys.exchange = exchange;
  else if (kind.flows) keys.exchange = noExchange(name, "stagnant" in kind.keys);
  if (kind.sends) keys.sends = sends;
  else if (kind.flows) keys.sends = noSends(name);
  return { says: kind.says, keys };
}

/** Compartments by the value of `kind`. */
export function compartmentShape(kinds: Readonly<Record<string, KindKeys>>): Shape {
  const of: Record<string, VariantShape> = {};
  for (const kind in kinds) of[kind] = kindRecord(kind, kinds[kind]);
  return { is: "variant", by: "kind", of };
}

const constants: KeyShape = {
  says: "Facts that no fit moves: a value, or a map of a value and what it is about. Values may use one another in any order.",
  example: "{total: 1000 L ± 1 %}",
  shape: named(
    either(
      quantity(),
      record({
        value: {
          shape: quantity(),
          says: "The value, with its unit; a `±` is carried into every interval.",
          required: true,
          example: "1000 L ± 1 %",
        },
        about: { shape: text, says: "What it means, and where it comes from." },
      }),
    ),
  ),
};

const parameters: KeyShape = {
  says: "What a fit may move, by name. Everything else uses `value`.",
  example: "{bypass: {value: 10 %, between: [0 %, 60 %]}}",
  shape: named(
    record({
      value: {
        shape: quantity(),
        says: "The value where nothing fits it, and one start of a fit.",
        required: true,
        example: "10 %",
      },
      between: {
        shape: list(quantity(), 2),
        says: "The lowest and the highest value that a fit may try, the lower first.",
        example: "[0 %, 60 %]",
        snippet: "[0 %, 60 %]",
      },
      spacing: {
        shape: choice("linear", "log"),
        says: "How starts are spread between the bounds: `log` for what may differ by powers of ten.",
        default: "linear",
      },
      about: {
        shape: text,
        says: "What it means, for tables and reports.",
        example: "share of the feed that slips to the outlet",
      },
      per: {
        shape: choice("trial"),
        says: "`trial`: it has a value of its own in each trial that is fitted, as a stirrer's circulation or the leak of a valve may have; `value` is where each begins, and holds in `simulate`, `sweep` and a duty by itself. In results each is named `trial title/name`. A study's duties must say its value in `with:`, since no test tells which it has there; `fit --write` leaves it as it is.",
        example: "trial",
      },
    }),
  ),
};

const feeds: KeyShape = {
  says: "What flows in, by name: how much, and where to. The name is also that of the feed in trials and duties.",
  example: "{feed: {flow: 10 L/min, to: bulk}}",
  shape: named(
    record({
      flow: {
        shape: quantity("flow"),
        says: "The flow of the feed, above zero. Values elsewhere may use it: `feed.flow` is that of the feed named `feed`.",
        required: true,
        example: "10 L/min",
      },
      to,
    }),
  ),
};

const checks: KeyShape = {
  says: "Statements that `verify` tests, so that a library of networks is tested like code.",
  example: "[{mean-time: product, equals: 100 min, within: 0.01 %}]",
  shape: list(
    record(
      {
        "mean-time": {
          shape: name,
          says: "The mean residence time at this outlet; `all` for all outlets together.",
          example: "product",
          snippet: "product",
        },
        volume: {
          shape: name,
          says: "The volume of this compartment, part or member of a `repeat` (`chain.2`); `all` for the whole vessel, dead volume included.",
          example: "all",
        },
        flow: {
          shape: name,
          says: "The flow through this compartment, part, member of a `repeat` (`chain.2`), feed or outlet; exchange and backflow left out.",
          example: "bulk",
        },
        follows: {
          shape: name,
          says: "With `mean-time`: of this substance, which `sends` divides, in place of the liquid; all that feeds bring.",
          needs: "mean-time",
          example: "solids",
        },
        equals: {
          shape: quantity("time", "volume", "flow"),
          says: "What it must be.",
          required: true,
          example: "100 min",
        },
        within: {
          shape: quantity("ratio"),
          says: "How far it may be off, relative to `equals`.",
          default: "0.1 %",
          example: "0.01 %",
        },
      },
      ["mean-time", "volume", "flow"],
    ),
  ),
};

const title = "What the network describes. The first key says what the file is; its value is the title.";

/** A network whole. */
function wholeNetwork(kinds: Readonly<Record<string, KindKeys>>): RecordShape {
  const top = heading("network", title, "Ester hydrolysis vessel V-3, as built");
  return record({
    network: top.network,
    format: top.format,
    basis: {
      shape: choice("volume", "mass"),
      says: "What the network counts in. `mass`: every `volume` is a hold-up in kg, every flow one in kg/h, and tracer in trials a mass fraction (`g/kg`) or an amount per kg; nothing asks for a density. Parts must have the same basis.",
      default: "volume",
      example: "mass",
    },
    ...top,
    constants,
    parameters,
    requires: {
      shape: list(text),
      says: "What physics forbids a fit to try: comparisons (`<`, `<=`, `>`, `>=`) that must hold, at the start values too.",
      example: "[riser + stagnant < total]",
    },
    feeds,
    compartments: {
      shape: named(compartmentShape(kinds)),
      says: "The bodies of the vessel by name, each of a `kind`, with where its outflow goes.",
      example: "{bulk: {kind: stirred, volume: 1000 L, to: product}}",
    },
    outlets: {
      shape: list(name),
      says: "Names where flow leaves the network; at least one stream must go to each.",
      example: "[product]",
    },
    checks,
  });
}

/**
 * A network, a variant of one, or a change alone (`change:` and no base), which a study applies to each rival.
 * @param kinds the table of compartment kinds
 */
export const networkShape = (kinds: Readonly<Record<string, KindKeys>>): Shape =>
  orVariant("network", wholeNetwork(kinds), true);
