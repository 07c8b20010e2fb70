import { evaluateNames } from "../compile/evaluate.js";
import type { Value } from "../model/value.js";
import { constantsOf, dutyInputs, networkSettings } from "../reaction/conditions.js";
import { sizeName } from "../reaction/exchangers.js";
import { siUnit } from "../units/describe.js";
import type { Dimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { sameSide } from "./draws.js";
import type { Operation, Row } from "./operate.js";

/** Something that a duty in a network depends on and that can be given another value, by the name that people use. */
export interface Input {
  readonly name: string;
  /** Which half of a `Row` it belongs to. */
  readonly of: "vessel" | "duty";
  readonly dimension: Dimension;
  /** The unit that the file gives it in, else a usual one. */
  readonly unit: Unit;
  /** At present, SI. */
  readonly value: number;
  /** Declared bounds, SI. */
  readonly between: readonly [number, number] | undefined;
  readonly log: boolean;
  /** What no value may pass, SI. */
  readonly limits?: readonly [number, number];
  /** One standard deviation that is declared of it, where it has the value `at`, SI; undefined: taken to be known, or fitted. */
  sd?(at: number): number;
}

/**
 * Every input: constants of the chemistry (`k1`, and `bulk.k1` where it holds there only), what feeds bring (`feed.A`, and
 * `feed.A.to` of an upset), the temperature (with heat balances `feed.temperature`, `bulk.jacket`, `bulk.conductance`, `heat-capacity`, `feed.effectiveness` of an exchanger); then parameters and constants of the network and `feed.flow`. A name that both have is the chemistry's, as in `with:`.
 */
export function inputsOf(operation: Operation): Input[] {
  const { network, duty, values } = operation;
  const env = evaluateNames(network, { ...values, ...networkSettings(duty) });
  const unitOf = (value: Value): Unit => value.unit ?? network.units.unitFor(value.dimension);
  const inputs: Input[] = [];
  const declared = new Map(dutyInputs(duty.chemistry, duty).map((i) => [i.name, i.sd]));
  // What is a share of the value grows with it.
  const spread = (sd: number | undefined, written: Value, value: number): Pick<Input, "sd"> =>
    sd === undefined || !(sd > 0)
      ? {}
      : { sd: written.relative && value !== 0 ? (at) => Math.abs(at / value) * sd : () => sd };
  const add = (name: string, of: Input["of"], source: Value, value: number, more: Partial<Input> = {}): void => {
    if (inputs.some((i) => i.name === name)) return;
    const { dimension } = source;
    const own = of === "duty" ? spread(declared.get(name), source, value) : {};
    inputs.push({ name, of, dimension, unit: unitOf(source), value, between: undefined, log: false, ...own, ...more });
  };
  const { chemistry } = duty;
  if (chemistry) {
    const numbers = constantsOf(chemistry, duty);
    chemistry.constants.forEach(({ name, value }, k) => {
      const written = duty.with.get(name)?.value ?? value;
      const unit = written.unit ?? value.unit ?? usual(value.dimension);
      add(name, "duty", value, numbers[k], { unit, ...spread(declared.get(name), written, numbers[k]) });
    });
  }
  for (const [place, { constants }] of duty.local ?? []) {
    for (const [name, { value }] of constants) add(`${place}.${name}`, "duty", value, value.of([]));
  }
  for (const [feed, { species }] of duty.feeds) {
    for (const [name, { value }] of species) add(`${feed}.${name}`, "duty", value, value.of([]));
  }
  for (const [feed, { courses }] of duty.feeds) {
    for (const [name, course] of courses ?? []) {
      if (course.is === "upset") add(`${feed}.${name}.to`, "duty", course.to, course.to.of([]));
    }
  }
  if (duty.heat) {
    for (const [feed, { temperature }] of duty.feeds) {
      if (temperature) add(`${feed}.temperature`, "duty", temperature, temperature.of([]));
    }
    for (const [place, { temperature, conductance }] of duty.heat.jackets) {
      add(`${place}.jacket`, "duty", temperature, temperature.of([]));
      add(`${place}.conductance`, "duty", conductance, conductance.of([]));
    }
    for (const exchanger of duty.heat.exchangers) {
      const { is, value } = exchanger.size;
      add(sizeName(exchanger), "duty", value, value.of([]), is === "effectiveness" ? { limits: [0, 1] } : {});
    }
    if (chemistry?.heatCapacity) add("heat-capacity", "duty", chemistry.heatCapacity, chemistry.heatCapacity.of([]));
  }
  if (duty.temperature) add("temperature", "duty", duty.temperature, duty.temperature.of([]));
  for (const { name, slot, role, value, between, spacing } of network.names) {
    if (role === "inflow") continue;
    const written = duty.flows.get(name.replace(/\.flow$/, ""))?.value ?? duty.settings.get(name)?.value ?? value;
    add(name, "vessel", value, env[slot], {
      unit: written.unit ?? unitOf(value),
      between: between && [between[0].of(env), between[1].of(env)],
      log: spacing === "log",
      ...(name in values && !duty.flows.has(name.replace(/\.flow$/, "")) && !duty.settings.has(name)
        ? {}
        : spread(written.sd?.(env), written, env[slot])),
    });
  }
  return inputs;
}

const usual = (dimension: Dimension): Unit => ({ name: siUnit(dimension), factor: 1, offset: 0, dimension });

/** A row with some inputs at other values, SI. What is declared with a `±` and was drawn lies as many standard deviations off as before. */
export function rowWith(row: Row, inputs: readonly Input[], values: readonly number[]): Row {
  const drawn = ({ name, of, value, sd }: Input, at: number): number => {
    if (!sd) return at;
    const own = row[of][name];
    const off = own === undefined ? (row.off[of][name] ?? 0) : (own - value) / sd(value);
    const there = at + off * sd(at);
    return of === "duty" ? sameSide(at, there) : there;
  };
  const of = (half: Input["of"]): Record<string, number> =>
    Object.fromEntries(
      inputs.flatMap((input, k) => (input.of === half ? [[input.name, drawn(input, values[k])] as const] : [])),
    );
  return { ...row, vessel: { ...row.vessel, ...of("vessel") }, duty: { ...row.duty, ...of("duty") } };
}
