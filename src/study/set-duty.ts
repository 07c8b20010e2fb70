import type { Duty, DutyFeed, Placed } from "../model/duty.js";
import type { Value } from "../model/value.js";
import { sizeName } from "../reaction/exchangers.js";

/**
 * A duty with some of its inputs (`inputsOf`, those of the duty) at other values, known exactly.
 * @param given SI, by the name of the input
 */
export function dutyWith(duty: Duty, given: ReadonlyMap<string, number>): Duty {
  if (given.size === 0) return duty;
  const set = (name: string, value: Value): Value => {
    const x = given.get(name);
    return x === undefined ? value : exactly(value, x);
  };
  const placed = (name: string, { at, value }: Placed): Placed => ({ at, value: set(name, value) });
  const { chemistry, heat, local, temperature } = duty;
  const constants = (chemistry?.constants ?? []).flatMap(({ name, at, value }): [string, Placed][] => {
    const x = given.get(name);
    return x === undefined ? [] : [[name, { at, value: exactly(duty.with.get(name)?.value ?? value, x) }]];
  });
  const capacity = chemistry?.heatCapacity && set("heat-capacity", chemistry.heatCapacity);
  return {
    ...duty,
    chemistry: chemistry && capacity ? { ...chemistry, heatCapacity: capacity } : chemistry,
    with: new Map([...duty.with, ...constants]),
    feeds: new Map([...duty.feeds].map(([feed, own]) => [feed, fedWith(feed, own, set, placed)])),
    temperature: temperature && set("temperature", temperature),
    ...(local
      ? {
          local: new Map(
            [...local].map(([place, { at, constants: own }]) => [
              place,
              { at, constants: new Map([...own].map(([name, c]) => [name, placed(`${place}.${name}`, c)])) },
            ]),
          ),
        }
      : {}),
    ...(heat
      ? {
          heat: {
            ...heat,
            jackets: new Map(
              [...heat.jackets].map(([place, jacket]) => [
                place,
                {
                  ...jacket,
                  temperature: set(`${place}.jacket`, jacket.temperature),
                  conductance: set(`${place}.conductance`, jacket.conductance),
                },
              ]),
            ),
            exchangers: heat.exchangers.map((e) => ({
              ...e,
              size: { ...e.size, value: set(sizeName(e), e.size.value) },
            })),
          },
        }
      : {}),
  };
}

function fedWith(
  feed: string,
  own: DutyFeed,
  set: (name: string, value: Value) => Value,
  placed: (name: string, of: Placed) => Placed,
): DutyFeed {
  const { species, temperature, courses } = own;
  return {
    ...own,
    species: new Map([...species].map(([name, of]) => [name, placed(`${feed}.${name}`, of)])),
    temperature: temperature && set(`${feed}.temperature`, temperature),
    ...(courses
      ? {
          courses: new Map(
            [...courses].map(([name, course]) => [
              name,
              course.is === "upset" ? { ...course, to: set(`${feed}.${name}.to`, course.to) } : course,
            ]),
          ),
        }
      : {}),
  };
}

const exactly = (value: Value, x: number): Value => ({ ...value, uses: [], of: () => x, sd: undefined });
