import { constantsIn, withKinetics } from "../fit/kinetics.js";
import type { Fit } from "../fit/result.js";
import type { Duty, Placed } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Operation } from "./operate.js";

/**
 * A duty in a network with what a fit found: parameters of the vessel and, where trials were of the duty's chemistry, its rate
 * constants. What the duty sets itself comes before both.
 */
export function operationOf(network: Network, fit: Fit | undefined, trials: readonly Trial[], duty: Duty): Operation {
  const values = fit?.values ?? {};
  const { chemistry } = duty;
  if (!chemistry || !fit) return { network, duty, values, kinetics: new Map() };
  const whole = withKinetics(network, trials);
  const own = constantsIn(whole, chemistry, values);
  const fitted = new Map<string, Placed>();
  for (const { name, at, value } of chemistry.constants) {
    if (!(name in own) || duty.with.has(name)) continue;
    fitted.set(name, { at, value: { ...value, uses: [], of: () => own[name], sd: undefined } });
  }
  const kinetics = new Map(
    whole.names.flatMap((n) =>
      n.chemistry?.path === chemistry.path && fitted.has(n.chemistry.name) ? [[n.name, n.chemistry.name] as const] : [],
    ),
  );
  return { network, duty: { ...duty, with: new Map([...fitted, ...duty.with]) }, values, kinetics };
}
