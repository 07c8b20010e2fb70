import type { Value } from "../model/value.js";
import type { Rule } from "./rule.js";

/** A `±` counts where it has a name: on a constant, a parameter or a feed's flow. Elsewhere nothing would carry it. */
export const spreadsNamed: Rule = (network, report) => {
  const look = (what: string, value: Value): void => {
    if (value.sd) report("spread-unnamed", value.at, { what });
  };
  for (const c of network.compartments) {
    for (const [key, value] of Object.entries(c.values)) look(`the ${key} of '${c.name}'`, value);
    for (const e of c.exchanges) look(`the flow between '${c.name}' and '${e.partner}'`, e.flow);
  }
  for (const node of [...network.feeds, ...network.compartments]) {
    for (const { split, to } of node.streams) {
      if ("value" in split) look(`the ${split.is} from '${node.name}' to '${to}'`, split.value);
    }
  }
};
