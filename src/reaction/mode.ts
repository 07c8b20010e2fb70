/** How a small disturbance of a steady state goes on: 1/s, the fastest of its modes; above zero it grows. */
export interface Mode {
  readonly growth: number;
  /** rad/s of that mode; 0 where it does not swing. */
  readonly swing: number;
  /** True where only the sign of the growth is known. */
  readonly rough?: true;
}
