export const nameEntries = {} as const;
