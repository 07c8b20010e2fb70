/** Things to come, earliest first; those of one time come together. */
export class EventQueue<T extends { readonly time: number }> {
  private readonly heap: T[] = [];

  get size(): number {
    return this.heap.length;
  }

  push(event: T): void {
    const { heap } = this;
    let at = heap.push(event) - 1;
    while (at > 0) {
      const above = (at - 1) >> 1;
      if (heap[above].time <= event.time) break;
      heap[at] = heap[above];
      at = above;
    }
    heap[at] = event;
  }

  /** Time of the next; Infinity where there is none. */
  get next(): number {
    return this.heap[0]?.time ?? Number.POSITIVE_INFINITY;
  }

  /** Takes the next, and all that are no later than `apart` after it. */
  pop(apart: number): T[] {
    const first = this.take();
    if (!first) return [];
    const together = [first];
    while (this.next - first.time <= apart) together.push(this.take() as T);
    return together;
  }

  private take(): T | undefined {
    const { heap } = this;
    const [first] = heap;
    const last = heap.pop();
    if (heap.length === 0 || !last) return first;
    let at = 0;
    for (;;) {
      let below = 2 * at + 1;
      if (below >= heap.length) break;
      if (below + 1 < heap.length && heap[below + 1].time < heap[below].time) below++;
      if (heap[below].time >= last.time) break;
      heap[at] = heap[below];
      at = below;
    }
    heap[at] = last;
    return first;
  }
}
