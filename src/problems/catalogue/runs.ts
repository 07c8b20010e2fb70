export const runEntries = {} as const;
