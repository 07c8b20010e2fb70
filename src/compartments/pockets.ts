/** Quiet liquid that exchanges with the flow all along a body: volume held in m3, exchange in m3/s. */
export interface Pockets {
  readonly volume: number;
  readonly exchange: number;
}
