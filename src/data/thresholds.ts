/**
 * When a shape is told: all thresholds of the findings that a curve gives by itself, in one place. They are starting points
 * from practice, set so that a curve without the trait seldom shows it; how seldom is measured in test/data/measured.test.ts
 * and printed in the manual. Change the version with any of them.
 */
export const thresholds = {
  version: 1,
  /** Standard errors that a departure must exceed. */
  sure: 3,
  /** The line through ln W: from one share still to come to another. */
  lineFrom: 0.8,
  lineTo: 0.25,
  /** Scatter of ln W about that line, up to which it is called straight. */
  straight: 0.05,
  /** Least bypass, as a share of the flow, and least delay, as a share of the mean. */
  bypassLeast: 0.01,
  delayLeast: 0.03,
  /** A slow part: its decay is at most this share of the early one's, over half a decade of W at least. */
  slowRatio: 0.5,
  slowFrom: 0.12,
  slowSpan: 3,
  /** W below so many of its errors is not looked at. */
  washoutLeast: 5,
  /** Fall of the escape intensity after its highest, as a share of that. */
  intensityFall: 0.25,
  /** Peaks: rise over the noise, and over the highest. */
  peakNoise: 8,
  peakLeast: 0.03,
  /** Spacings of the peaks of a loop agree to this share. */
  even: 0.2,
  /** Share of the mean within which the highest point counts as at the start. */
  atOnce: 0.05,
  /** Half the time from 16 to 84 % over the middle time: below it near plug flow. Variance over squared mean, within: well mixed. */
  plug: 0.22,
  mixed: [0.85, 1.2],
} as const;
