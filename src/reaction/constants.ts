import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";

/**
 * Values to use in place of a duty's, SI, by name: `k1`, `feed.A`, `bulk.k1` (local), `temperature`; with heat balances also
 * `feed.temperature`, `bulk.jacket`, `bulk.conductance`, `heat-capacity` and `heat of A -> P`, and a constant that follows the
 * temperature is then named by its value at the reference temperature. Unknown names have no effect.
 */
export type DutySettings = Readonly<Record<string, number>>;

/** K: the duty's temperature; with heat balances the mean of its feeds', at which constants are told. */
export function referenceTemperature(duty: Duty, settings: DutySettings = {}): number {
  const own = settings.temperature ?? duty.temperature?.of([]);
  if (own !== undefined) return own;
  const feeds = [...duty.feeds.values()].flatMap(({ temperature }) => (temperature ? [temperature.of([])] : []));
  // Only a chemistry that does not ask for the temperature may be without one.
  return feeds.reduce((sum, t) => sum + t, 0) / feeds.length;
}

/**
 * Constants of a chemistry at a duty, then the temperature: the tail of an Env. SI.
 * @param places names under the duty's `local:` whose constants hold, later ones before earlier ones
 */
export function constantsOf(
  chemistry: Chemistry,
  duty: Duty,
  settings: DutySettings = {},
  places: readonly string[] = [],
): Float64Array {
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  const local = new Map(
    places.flatMap((place) =>
      [...(duty.local?.get(place)?.constants ?? [])].map(([name, { value }]) => [
        name,
        settings[`${place}.${name}`] ?? value.of([]),
      ]),
    ),
  );
  env[chemistry.temperatureSlot] = referenceTemperature(duty, settings);
  for (const k of chemistry.order) {
    const { name, value } = chemistry.constants[k];
    env[n + k] = local.get(name) ?? settings[name] ?? duty.with.get(name)?.value.of([]) ?? value.of(env);
  }
  return env.slice(n);
}
