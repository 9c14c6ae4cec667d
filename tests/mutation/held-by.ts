/** Filters whose absence no call can show, by file and number in it, and what holds in their stead. */
export const heldBy: Readonly<Record<string, string>> = {};
