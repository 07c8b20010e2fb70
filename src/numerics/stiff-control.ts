/** Chooses step sizes from local errors, so that these stay just under 1. */
export interface StepControl {
  /**
   * Part by which to go on after a trial step.
   * @param error of the step, in units of the tolerance
   * @param effort iterations beyond which a step is too long to iterate well, over those allowed: cuts growth
   */
  accepted(h: number, error: number, effort: number): number;
  rejected(error: number, effort: number): number;
  /** Forgets the steps before. */
  begin(): void;
}

const safety = 0.9;
/** Largest growth and cut in one step. */
const growth = 8;
const shrink = 1 / 5;

/**
 * For a method whose error estimate has order h^(1/power). Predicts from the last two errors, so that a step that will be too
 * long is seen coming.
 * @see K. Gustafsson, ACM Trans. Math. Softw. 20 (1994) 496-517
 */
export function stepControl(power: number): StepControl {
  let lastH = 0;
  let lastError = 1;
  let rejectedBefore = false;
  const part = (error: number, effort: number): number =>
    Math.max(shrink, Math.min(growth, (safety * effort) / error ** power));
  return {
    begin() {
      lastH = 0;
      rejectedBefore = false;
    },
    accepted(h, error, effort) {
      let next = part(error, effort);
      if (lastH !== 0) {
        const predicted = safety * (h / lastH) * (lastError / (error * error)) ** power;
        next = Math.min(next, Math.max(shrink, Math.min(growth, predicted)));
      }
      if (rejectedBefore) next = Math.min(next, 1);
      rejectedBefore = false;
      lastH = h;
      lastError = Math.max(0.01, error);
      return next;
    },
    rejected(error, effort) {
      rejectedBefore = true;
      return lastH === 0 ? Math.min(0.1, part(error, effort)) : part(error, effort);
    },
  };
}
