import { balancesOf } from "../equations/balances.js";
import { equationsMarkdown } from "../equations/markdown.js";
import { parseNetwork } from "../parse/network.js";
import type { Context } from "./context.js";
import { type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";

export interface EquationsOptions {
  readonly output?: string;
}

/** More than anyone reads. */
const most = 2000;

/** `equations NETWORK`: the compiled balances, for a reviewer to read. */
export function equations(file: string, { output }: EquationsOptions, { inputs, io }: Context): Outcome {
  const network = inputs.document(file, parseNetwork);
  const plant = plantAt(network, {});
  if (plant.nodes.length > most) {
    throw new UsageError(`'${file}' has ${plant.nodes.length} nodes; equations of more than ${most} are not written`);
  }
  const balances = balancesOf(plant);
  const markdown = equationsMarkdown(plant, balances);
  if (output !== undefined) io.write(output, `${markdown}\n`);
  const count = balances.filter((b) => b.is === "state").length;
  return {
    status: 0,
    text: output === undefined ? markdown : `${output}: ${network.title}, ${count} state${count === 1 ? "" : "s"}`,
    json: {
      ok: true,
      network: network.title,
      balances: balances.map(({ left: _, ...balance }) => balance),
      markdown,
      ...(output === undefined ? {} : { written: output }),
    },
  };
}
