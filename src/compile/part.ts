/**
 * What a node of a plant is to an engine: a mixed volume, a transport delay, a meeting of streams without volume, or a
 * block: a body that is known by its transfer function alone.
 */
export const Part = { Cell: 0, Delay: 1, Joint: 2, Block: 3 } as const;
