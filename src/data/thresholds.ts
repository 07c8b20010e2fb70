/**
 * When a shape is told: all thresholds of the findings that a curve gives by itself, in one place. They are starting points
 * from practice, set so that a curve without the trait seldom shows it; how seldom is measured in test/data/measured.test.ts
 * and printed in the manual. Change the version with any of them.
 */
export const thresholds = {
  version: 2,
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
  /** Comparing the curves of several trials, each counted in its own half time. */
  across: {
    /** Flows count as the same up to this ratio, as different from that on. */
    flowSame: 1.1,
    flowRatio: 1.3,
    /** Curves coincide where F of both surely differs by less than this everywhere; they differ where noise as large has this chance, by that much at least. */
    margin: 0.05,
    chance: 0.01,
    least: 0.01,
    /** Standard errors by which a spread grows, a tail is longer, or volumes differ. */
    sure: 3,
    /** Share of a curve that may lie beyond its record. */
    tailMost: 0.1,
    /** Draws of the noise; points that a long log is brought down to. */
    draws: 60,
    points: 240,
    /** Effective volumes (flow times mean) count as the same within this share, whatever their errors. */
    volume: 0.05,
  },
} as const;
