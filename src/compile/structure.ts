import { type Adjacency, adjacency, stronglyConnected } from "../numerics/graph.js";
import { Part } from "./part.js";

/** What of a plant does not depend on values: its nodes' sorts and its links, and what follows from them, found when asked for. */
export class Structure {
  private foundGroups: Int32Array[] | undefined;
  private foundJoints: Int32Array[] | undefined;
  private foundInto: Adjacency | undefined;
  private foundOut: Adjacency | undefined;
  private foundLoop: boolean | undefined;

  constructor(
    readonly part: Uint8Array,
    readonly from: Int32Array,
    readonly to: Int32Array,
  ) {}

  /** Strongly connected groups of nodes in flow order (Tarjan 1972). */
  get groups(): readonly Int32Array[] {
    this.foundGroups ??= stronglyConnected({ size: this.part.length, from: this.from, to: this.to });
    return this.foundGroups;
  }

  /** Joints alone, in flow order; those that feed one another are a group. */
  get joints(): readonly Int32Array[] {
    if (this.foundJoints) return this.foundJoints;
    const { part, from, to } = this;
    const isJoint = (i: number): boolean => part[i] === Part.Joint;
    const inner = [...from.keys()].filter((k) => isJoint(from[k]) && isJoint(to[k]));
    const graph = { size: part.length, from: inner.map((k) => from[k]), to: inner.map((k) => to[k]) };
    this.foundJoints = stronglyConnected(graph).filter((group) => isJoint(group[0]));
    return this.foundJoints;
  }

  /** Links by the node that they enter, and by the one that they leave. */
  get into(): Adjacency {
    this.foundInto ??= adjacency(this.part.length, this.to);
    return this.foundInto;
  }

  get out(): Adjacency {
    this.foundOut ??= adjacency(this.part.length, this.from);
    return this.foundOut;
  }

  /** Is there a tube in a circle? */
  get tubeInLoop(): boolean {
    this.foundLoop ??= this.groups.some(
      (g) =>
        g.some((i) => this.part[i] === Part.Delay) &&
        (g.length > 1 || this.from.some((f, k) => f === g[0] && this.to[k] === g[0])),
    );
    return this.foundLoop;
  }

  /** The same object for a plant of the same structure. */
  orNew(part: Uint8Array, from: Int32Array, to: Int32Array): Structure {
    const same = equal(part, this.part) && equal(from, this.from) && equal(to, this.to);
    return same ? this : new Structure(part, from, to);
  }
}

function equal(a: Uint8Array | Int32Array, b: Uint8Array | Int32Array): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}
