import type { Value } from "../model/value.js";
import type { Rule } from "./rule.js";

/** A volume or share that is written as nothing: legal, but there are plainer ways to say so. What a parameter makes 0 is its own affair. */
export const writtenZeros: Rule = (network, report) => {
  for (const { name, values, kind } of network.compartments) {
    if (values.volume && isZero(values.volume) && kind.flows) report("volume-zero", values.volume.at, { name });
  }
  for (const { name, streams } of [...network.feeds, ...network.compartments]) {
    for (const { to, split } of streams) {
      if (split.is === "share" && isZero(split.value)) report("share-zero", split.value.at, { name, to });
    }
  }
};

const isZero = ({ expression, sd }: Value): boolean =>
  expression.type === "number" && expression.value === 0 && sd === undefined;
