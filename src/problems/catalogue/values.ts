export const valueEntries = {} as const;
