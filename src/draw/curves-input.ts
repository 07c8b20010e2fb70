import type { PictureOptions } from "./picture.js";

/** Lines over one pair of axes, such as E or F of several outlets, or rivals over the same points. */
export interface Curves {
  readonly title: string;
  /** Quantity and unit: "time, min", "E, 1/min". */
  readonly x: string;
  readonly y: string;
  readonly lines: readonly CurveLine[];
  /** Decades along the bottom. */
  readonly xLog?: boolean;
  /** The axis need not reach down to nothing: what matters are differences. */
  readonly free?: boolean;
  /** A limit or a target. */
  readonly level?: { readonly at: number; readonly label: string };
  /** Where something stands along the bottom, upright across the plot: "now". */
  readonly upright?: { readonly at: number; readonly label: string };
  /** Measured points behind the lines; or marks of another sort, `names` beside each of them, or the label beside the first. */
  readonly points?: {
    readonly x: ArrayLike<number>;
    readonly y: ArrayLike<number>;
    readonly label?: string;
    readonly named?: boolean;
    readonly names?: readonly string[];
  };
}

export interface CurveLine {
  readonly label: string;
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  /** Parts of a distribution that all come at one time: plug flow. `area` is the share of the whole; else `words` tell it. */
  readonly spikes?: readonly { readonly x: number; readonly area: number; readonly words?: string }[];
  /** 95 % of what is possible lies here. */
  readonly band?: { readonly low: ArrayLike<number>; readonly high: ArrayLike<number> };
  readonly accent?: boolean;
  /** Leave the name at its end out: the axis says it. */
  readonly unnamed?: boolean;
  /** The name stands beside the line's middle, where its end is no place for it. */
  readonly beside?: boolean;
  /** What was computed, where the line only joins it. */
  readonly dots?: { readonly x: ArrayLike<number>; readonly y: ArrayLike<number> };
}

export interface CurvesOptions extends PictureOptions {
  readonly log?: boolean;
  readonly width?: number;
  readonly height?: number;
}
