import type { Network } from "../model/network.js";
import { nearest } from "../text/nearest.js";
import { UsageError } from "./outcome.js";

/** Refuses names under `--free` that are no parameters. */
export function requireParameters(network: Network, free: readonly string[]): void {
  const names = network.names.filter((n) => n.role === "parameter").map((n) => n.name);
  if (free.length === 0) throw new UsageError("--free names no parameter");
  for (const name of free) {
    if (names.includes(name)) continue;
    const near = nearest(name, names);
    const help = near
      ? `did you mean '${near}'?`
      : `there ${names.length > 0 ? `are ${names.join(", ")}` : "are none"}`;
    throw new UsageError(`--free: '${name}' is no parameter of this network; ${help}`);
  }
}
