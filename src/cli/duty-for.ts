import { checkDuty } from "../check/duty.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { parseDuty } from "../parse/duty.js";
import { collector } from "../problems/report.js";
import type { Inputs } from "./inputs.js";

/**
 * A duty by its path, held against the network that it is for: what is wrong with either is told at once.
 * @param inTime whether it is to be followed in time
 * @throws InputError with all problems, where there are any
 */
export function dutyFor(inputs: Inputs, path: string, network: Network, inTime = false): Duty {
  const duty = inputs.document(path, (text, options) =>
    parseDuty(text, options, (faulty, report) => checkDuty(network, faulty, report, inTime)),
  );
  const { report, problems } = collector();
  checkDuty(network, duty, report, inTime);
  inputs.accept(problems);
  return duty;
}
