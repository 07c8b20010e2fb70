export const yamlEntries = {} as const;
