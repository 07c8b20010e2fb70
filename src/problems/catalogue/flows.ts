export const flowEntries = {} as const;
