import { Part } from "../compile/part.js";
import type { Plant } from "../compile/plant.js";
import type { RecordedPlant } from "../compile/record.js";
import { NotRecorded, type Recorder, recorded, type WhyNot } from "../compile/recorder.js";
import { isClosed } from "../model/network.js";
import { factKey, type Injection, type Retained, type Trial } from "../model/trial.js";
import type { Slot } from "../numerics/tape.js";
import { isLevel } from "../units/basis.js";
import { exact } from "./exact.js";
import type { Drive } from "./linear-system.js";
import { unitDrive } from "./puts.js";
import { RecordedUnrolling } from "./record-unroll.js";
import { engineFor } from "./trace.js";

/** A trial on a recorded plant: for every injection one linear system without delays, and what its probes see of it. */
export interface RecordedTrial {
  readonly recorder: Recorder;
  readonly puts: readonly RecordedPut[];
  /** Transport delays of the plant's tubes, s, in its order. */
  readonly tubes: readonly Slot[];
}

export interface RecordedPut {
  /** s on the trial's clock. */
  readonly start: number;
  /** Of one unit of what is put in; how many there are is in `input` and what passes undispersed. */
  readonly drive: Drive;
  /** Number of states; rates between them, 1/s, and what enters them, row by row. */
  readonly states: number;
  readonly rates: readonly { readonly row: number; readonly column: number; readonly slot: Slot }[];
  readonly input: readonly Slot[];
  readonly passages: readonly RecordedPassage[];
}

/** One way to a reading: what is seen a delay later of states and, undispersed, of the drive. */
export interface RecordedPassage {
  readonly reading: number;
  /** Of what the reading draws. */
  readonly share: number;
  readonly delay: Slot;
  readonly states: Int32Array;
  readonly weights: readonly Slot[];
  readonly direct: Slot;
}

/** More states than these are left to the engines. */
const mostStates = 12;

/**
 * Records a trial on a plant.
 * @returns why not, where it cannot be: vessels in balance with what came before, tubes in circles, many states
 */
export function recordTrial(plant: RecordedPlant, trial: Trial): RecordedTrial | WhyNot {
  return recorded(() => {
    const { recorder } = plant;
    const puts = trial.injections.map((one, index) => recordPut(plant, trial, one, index));
    return { recorder, puts, tubes: tubesOf(plant) };
  });
}

/** Are they of a sort that may be recorded? Whatever is put into a vessel that is not closed, with steady flows. */
export const isRecordable = (plant: Plant, trial: Trial, horizon: number): boolean =>
  !isClosed(plant) &&
  trial.contents === undefined &&
  trial.flowLogs === undefined &&
  trial.tracer?.follows === undefined &&
  engineFor(plant, horizon) === exact;

function tubesOf({ recorder, plant, volume, inflow }: RecordedPlant): Slot[] {
  const { part } = plant.columns;
  return volume.flatMap((v, i) => (part[i] === Part.Delay ? [recorder.tape.divide(v, inflow[i])] : []));
}

/** How many times its volume a node has for a tracer that bodies hold back. */
function heldBy({ recorder, plant }: RecordedPlant, retained: readonly Retained[]): (node: number) => Slot {
  const { tape } = recorder;
  const factors = retained.map(({ body, factor }) => {
    const named = typeof factor === "number" ? undefined : plant.network.names.find((n) => n.name === factor.name);
    const slot = typeof factor === "number" ? tape.constant(factor) : named ? recorder.named(named.slot) : undefined;
    if (slot === undefined) throw new NotRecorded();
    recorder.keepPositive(slot, named ? plant.env[named.slot] : 1);
    return { body, slot };
  });
  return (node) => {
    const name = plant.columns.nameOf(node);
    const own = factors.filter(({ body }) => name === body || name.startsWith(`${body}.`));
    return own.reduce((product, { slot }) => tape.multiply(product, slot), tape.constant(1));
  };
}

function recordPut(on: RecordedPlant, trial: Trial, injection: Injection, index: number): RecordedPut {
  const { recorder, plant } = on;
  const { tape } = recorder;
  const entry = plant.entry.get(injection.at);
  if (entry === undefined) throw new RangeError(`no place '${injection.at}' in the network`);
  const drive = unitDrive(injection, trial.tracer?.decay ?? 0);
  const seen = { loss: trial.tracer?.loss ?? 0, held: heldBy(on, trial.tracer?.retained ?? []) };
  const unrolled = new RecordedUnrolling(on, entry, sizeOf(on, injection, factKey.dose(index), entry), seen);
  const rows = [...unrolled.rows];
  const input = [...unrolled.input];
  const zero = tape.constant(0);
  const passages = trial.readings.flatMap((r, reading) => {
    const line = (of: "delay" | "lag"): Slot =>
      r.line[of] ? recorder.fact(r.line[of], factKey.line(reading, of)) : zero;
    const [late, lag] = [line("delay"), line("lag")];
    const places = r.places.length === 1 ? [{ name: r.at, share: 1 }] : r.places;
    return places.flatMap(({ name, share }) => {
      const node = plant.exit.get(name);
      if (node === undefined) throw new RangeError(`no place '${name}' in the network`);
      return unrolled.outflow(node).map(({ delay, weights, direct }): RecordedPassage => {
        const whole = { reading, share, delay: tape.add(delay, late) };
        if (tape.known(lag) === 0) {
          return { ...whole, states: Int32Array.from(weights.keys()), weights: [...weights.values()], direct };
        }
        // A first-order detector is one more state: y' = (seen - y) / lag.
        recorder.keepPositive(lag, r.line.lag ? recorder.at(r.line.lag) : 0);
        const row = new Map([...weights].map(([s, w]) => [s, tape.divide(w, lag)]));
        const state = rows.push(row) - 1;
        row.set(state, tape.divide(tape.constant(-1), lag));
        input.push(tape.divide(direct, lag));
        return { ...whole, states: Int32Array.of(state), weights: [tape.constant(1)], direct: zero };
      });
    });
  });
  if (rows.length > mostStates) throw new NotRecorded();
  const rates = rows.flatMap((row, i) => [...row].map(([column, slot]) => ({ row: i, column, slot })));
  return { start: injection.start, drive, states: rows.length, rates, input, passages };
}

/** What the tracer rate is in proportion to. */
function sizeOf({ recorder, inflow }: RecordedPlant, { form }: Injection, fact: string, entry: number): Slot {
  if (form.is === "signal") return inflow[entry];
  if (form.is === "pulse") return recorder.fact(form.amount, fact);
  // A vessel in balance with what came before is left to others.
  if (form.from && recorder.tape.known(recorder.value(form.from)) !== 0) throw new NotRecorded();
  const level = recorder.fact(form.level, fact);
  return isLevel(form.level.dimension) ? recorder.tape.multiply(level, inflow[entry]) : level;
}
