import { Part } from "../compile/part.js";
import type { RecordedPlant } from "../compile/record.js";
import { NotRecorded, type Recorder } from "../compile/recorder.js";
import type { Injection, Trial } from "../model/trial.js";
import type { Slot } from "../numerics/tape.js";
import { isLevel } from "../units/basis.js";
import type { Drive } from "./linear-system.js";
import { driveOf } from "./puts.js";
import { RecordedUnrolling } from "./record-unroll.js";

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
  /** In units of what `size` on the tape says. */
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
 * @returns undefined where it cannot be recorded: vessels in balance with what came before, tubes in circles, many states
 */
export function recordTrial(plant: RecordedPlant, trial: Trial): RecordedTrial | undefined {
  try {
    const { recorder } = plant;
    const puts = trial.injections.map((i) => recordPut(plant, trial, i));
    return { recorder, puts, tubes: tubesOf(plant) };
  } catch (e) {
    if (e instanceof NotRecorded) return undefined;
    throw e;
  }
}

function tubesOf({ recorder, plant, volume, inflow }: RecordedPlant): Slot[] {
  const { part } = plant.columns;
  return volume.flatMap((v, i) => (part[i] === Part.Delay ? [recorder.tape.divide(v, inflow[i])] : []));
}

function recordPut(recorded: RecordedPlant, trial: Trial, injection: Injection): RecordedPut {
  const { recorder, plant } = recorded;
  const { tape } = recorder;
  const entry = plant.entry.get(injection.at);
  if (entry === undefined) throw new RangeError(`no place '${injection.at}' in the network`);
  const size = sizeOf(recorded, injection, entry);
  const { drive, before } = driveOf(plant, injection, trial.tracer?.decay ?? 0);
  if (before !== 0) throw new NotRecorded();
  const unrolled = new RecordedUnrolling(recorded, entry, size.slot);
  const rows = [...unrolled.rows];
  const input = [...unrolled.input];
  const zero = tape.constant(0);
  const passages = trial.readings.flatMap((r, reading) => {
    const line = (of: "delay" | "lag"): Slot => (r.line[of] ? recorder.value(r.line[of]) : zero);
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
  return { start: injection.start, drive: scaled(drive, 1 / size.here), states: rows.length, rates, input, passages };
}

/** What a drive is in proportion to. */
function sizeOf(
  { recorder, plant, inflow }: RecordedPlant,
  { form }: Injection,
  entry: number,
): { slot: Slot; here: number } {
  const { tape } = recorder;
  const through = plant.columns.inflow[entry];
  if (form.is === "signal") return { slot: inflow[entry], here: through };
  const value = form.is === "pulse" ? form.amount : form.level;
  const [slot, here] = [recorder.value(value), recorder.at(value)];
  if (here === 0) throw new NotRecorded();
  if (form.is === "step" && form.from && recorder.at(form.from) !== 0) throw new NotRecorded();
  if (form.is === "step" && form.from && recorder.moves(recorder.value(form.from))) throw new NotRecorded();
  const perFlow = form.is === "step" && isLevel(form.level.dimension);
  return perFlow ? { slot: tape.multiply(slot, inflow[entry]), here: here * through } : { slot, here };
}

const scaled = ({ amount, times, level, slope }: Drive, by: number): Drive => ({
  amount: amount * by,
  times,
  level: level.map((x) => x * by),
  slope: slope.map((x) => x * by),
});
