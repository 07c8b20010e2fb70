import { memberOf } from "../model/members.js";
import type { Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import type { Span } from "../text/source.js";

type Look = (name: string, at: Span, wanted: string, among: readonly string[]) => unknown;

/** Is there a place of that name that may hold something? */
export function checkHolds(network: Network, name: string, at: Span, look: Look, report: Report): void {
  const { compartments, groups } = network;
  const body = compartments.find((c) => c.name === name);
  const holds = body && (body.kind.keys.volume !== undefined || body.zones !== undefined);
  if (body && !(holds && body.kind.flows)) {
    const why = body.kind.flows ? "it holds no liquid" : "the flow never reaches it, so nothing of it is seen";
    report("contents-nothing", at, { name, why });
  } else if (!body && name !== "all" && !memberOf(compartments, name)) {
    look(name, at, "compartment or part", ["all", ...[...compartments, ...groups].map((p) => p.name)]);
  }
}
