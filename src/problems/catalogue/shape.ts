export const shapeEntries = {} as const;
