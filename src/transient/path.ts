import type { FlowCourse } from "../simulate/flow-course.js";

/** The way through a body that is passed along: who entered when, by what has been displaced since. */
export class Path {
  /**
   * @param volume m3
   * @param lag    part of it that must be displaced before anything leaves
   */
  constructor(
    readonly course: FlowCourse,
    readonly node: number,
    readonly volume: number,
    readonly lag: number,
  ) {}

  /** s: the mean stay, by the flow at 0. */
  get mean(): number {
    return this.volume / this.course.through(this.node, 0, -1);
  }

  /** When that entered, s, since which x volumes have been displaced at t; below 0 where it was there before. */
  entered(t: number, x: number): number {
    return this.course.when(this.node, t, x * this.volume);
  }

  /** Volumes displaced from one time to another. */
  displaced(from: number, to: number): number {
    return this.course.passed(this.node, from, to) / this.volume;
  }

  /** When x volumes will have been displaced since a time. */
  leaves(entered: number, x: number): number {
    return this.course.leaves(this.node, entered, x * this.volume);
  }

  /** m3/s */
  flow(t: number, side: number): number {
    return this.course.through(this.node, t, side);
  }
}
