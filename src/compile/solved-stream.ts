import type { Stream } from "../model/network.js";

/** A stream with its flow, m3/s; places by index: feeds, then compartments, then outlets, in file order. */
export interface SolvedStream {
  readonly from: number;
  readonly to: number;
  readonly flow: number;
  readonly stream: Stream;
}
