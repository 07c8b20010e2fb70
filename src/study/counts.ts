import type { Network } from "../model/network.js";
import { type NetworkDocument, networkFromTree } from "../parse/network.js";
import { collector, hasErrors } from "../problems/report.js";
import { mergeTree } from "../read/merge.js";
import { child, entriesOf, textOf } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { dimensions } from "../units/dimension.js";
import { one } from "../units/unit.js";
import type { Input } from "./inputs.js";
import type { Operation } from "./operate.js";

/** An input that moves in whole steps: each is another network. */
export interface CountInput extends Input {
  /** The network with so many, or in words why there is none. */
  variant(count: number): Network | string;
}

export const isCount = (input: Input): input is CountInput => "variant" in input;

/** Tanks in a row that a sweep may come to. */
const most = 500;

/** How many tanks in series bodies have (`chain.repeat`), where the network writes it; nothing where it was not read from a file. */
export function countsOf({ network }: Pick<Operation, "network">): CountInput[] {
  if (!isDocument(network)) return [];
  const { tree, path, files } = { ...network, path: network.tree.at.source.path };
  return entriesOf(child(tree, "compartments")).flatMap(({ key, value }): CountInput[] => {
    const written = textOf(value, "repeat");
    if (written === undefined || !/^\d+$/.test(written)) return [];
    return [
      {
        name: `${key.text}.repeat`,
        of: "vessel",
        dimension: dimensions.ratio,
        unit: one,
        value: Number(written),
        between: undefined,
        log: false,
        limits: [1, most],
        variant(count) {
          const text = `compartments: {${key.text}: {repeat: ${count}}}`;
          const { report } = collector();
          const change = readYaml({ path, text }, report);
          if (!change) return `'${key.text}' cannot be changed`;
          const made = networkFromTree(mergeTree(tree, change), path, files);
          const wrong = made.problems.find((p) => p.severity === "error");
          return made.network && !hasErrors(made.problems)
            ? made.network
            : (wrong?.message ?? "the network is not complete");
        },
      },
    ];
  });
}

const isDocument = (network: Network): network is NetworkDocument => "tree" in network && "files" in network;

/** An operation with counts at some values, or in words why it cannot be. */
export function withCounts(
  operation: Operation,
  inputs: readonly Input[],
  values: readonly number[],
): Operation | string {
  const [first, ...more] = inputs.flatMap((input, k) =>
    isCount(input) ? [{ input, count: Math.round(values[k]) }] : [],
  );
  if (!first) return operation;
  const network = first.input.variant(first.count);
  if (typeof network === "string") return network;
  // A second count is one of the network that the first has made.
  const changed: Operation = { ...operation, network };
  if (more.length === 0) return changed;
  const again = countsOf(changed);
  const others = more.map(({ input }) => again.find((c) => c.name === input.name));
  if (others.some((c) => c === undefined)) return "the network has no such count";
  return withCounts(
    changed,
    others as CountInput[],
    more.map((m) => m.count),
  );
}
