import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { ChangeDocument, Rival } from "../model/study.js";
import { applyChange } from "./change.js";
import { declaredDraws, declaredNames } from "./draws.js";

/** A rival with a change laid over it: what the change sets is no longer as fitted. */
export interface ChangedVessel {
  readonly network: Network;
  readonly values: Settings;
  /** Draws of the rival as they hold for the changed vessel; what the change brings or sets varies by its own `±`. */
  drawn(settings: readonly Settings[], seed: number): Settings[];
}

/** @returns why the change cannot be laid over this rival, where it cannot */
export function changedVessel(
  rival: Rival,
  change: ChangeDocument,
  values: Settings,
): ChangedVessel | { readonly skipped: string } {
  const changed = applyChange(rival, change);
  if ("skipped" in changed) return changed;
  const { network, sets } = changed;
  const keep = (settings: Settings): Settings =>
    Object.fromEntries(Object.entries(settings).filter(([name]) => !sets.has(name)));
  const own = new Set(rival.network.names.map((n) => n.name));
  const kept = keep(values);
  return {
    network,
    values: kept,
    drawn(settings, seed) {
      const env = evaluateNames(network, kept);
      const brought = declaredNames(network, undefined).filter((n) => !own.has(n.name) || sets.has(n.name));
      const inputs = brought.map((n) => ({ name: n.name, value: env[n.slot], sd: n.value.sd?.(env) ?? 0 }));
      const varied = declaredDraws(inputs, settings.length, seed);
      return settings.map((s, i) => ({ ...keep(s), ...varied[i] }));
    },
  };
}
