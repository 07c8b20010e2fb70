import { decayMoments, type RawFour } from "./decay.js";
import { type Bins, gather, type Linear, linearFit, type TailedRecord, windowStart } from "./late-window.js";

/**
 * A decay with a time constant of half or a quarter of the record, which baseline, faster decays and noise would hide: what
 * the curve would gain if it were there, at its least-squares level and one standard error more.
 */
export interface Hidden {
  /** At the end. */
  readonly level: number;
  /** Integrals of t^k, k = 0 to 3, beyond the end and by what the baseline gives back before it (from time 0 on). */
  readonly raw: RawFour;
}

/**
 * Decays of one rate that fall by less than e^3 over the record, or the slower of two that falls by less than e^5, are its
 * slow tail: one slower still is not looked for. One alone may be a slow and a fast one that are taken together.
 */
export const slowest = { alone: 3, ofTwo: 5 } as const;

/**
 * What may lie in a record beside decays of these rates, from the linear fit with one more; of half and a quarter of the
 * record as its time constant the one that would matter more.
 * @param rates  of the decays that are seen, the slowest first; none is looked for where that is slow beside the record
 */
export function hiddenBeside(
  record: TailedRecord,
  bins: Bins,
  rates: readonly number[],
  scatter: number,
): Hidden | undefined {
  const { time, before, mode } = record;
  const end = time[time.length - 1];
  const span = end - time[before];
  const seen = Math.min(...rates);
  if (seen * span < (rates.length > 1 ? slowest.ofTwo : slowest.alone)) return undefined;
  const apart = [2 / span, 4 / span].filter((rate) => seen > 1.5 * rate);
  const found = apart.flatMap((rate) => {
    const fit = linearFit(bins, mode, [rate, ...rates], end, true);
    return fit ? [hiddenAt(bins, record, [rate, ...rates], fit, scatter)] : [];
  });
  return found.reduce<Hidden | undefined>((most, h) => (most && most.raw[1] >= h.raw[1] ? most : h), undefined);
}

/** The same where no decay is known: the last third alone, in which the fast ones are gone. */
export const hiddenAtEnd = (record: TailedRecord, scatter: number): Hidden | undefined =>
  hiddenBeside(record, gather(record, windowStart(record, 0.35)), [], scatter);

function hiddenAt(bins: Bins, record: TailedRecord, rates: readonly number[], fit: Linear, scatter: number): Hidden {
  const { time, before, mode } = record;
  const end = time[time.length - 1];
  const slow = ["nothing", "constant", "drift"].indexOf(mode);
  const own = fit.inverse[slow * fit.n + slow];
  const level = Math.hypot(Math.max(0, fit.x[slow]), scatter * Math.sqrt(own));
  // As the level of this decay moves, the others follow to keep the fit best.
  const change = Array.from({ length: fit.n }, (_, j) => (level * fit.inverse[slow * fit.n + j]) / own);
  const [offset, drift] = [slow > 0 ? change[0] : 0, slow > 1 ? change[1] : 0];
  const raw = [0, 1, 2, 3].map((k) => {
    const power = (p: number): number => end ** (p + 1) / (p + 1);
    const under = (offset - drift * bins.middle) * power(k) + drift * power(k + 1);
    return rates.reduce((sum, rate, j) => {
      const zero = j === 0 ? end : time[before];
      return sum + decayMoments(change[slow + j] * Math.exp(-rate * (end - zero)), rate, end)[k];
    }, -under);
  });
  return { level, raw: raw as unknown as RawFour };
}
