/** What a target was found to be: the mark it is named like, and whether only loosely so. */
export interface MarkMatch {
	mark: string;
	/** True where the two differ in case or separators, which is said to the person. */
	isLoose: boolean;
}

/**
 * Which point names mean which marks. A name is a mark's where both are the same after trimming; else, where case and separators
 * (space, hyphen, underscore, point, slash) are left out of both and exactly one mark and one name remain that read so, it is that
 * mark loosely. Leading zeros count: T1 and T01 are two marks on many sites. A mark that some name has exactly is not matched
 * loosely besides. Names that mean no mark are left out; answers are in the order of `names`, each name once.
 */
export function matchMarks(names: readonly string[], marks: readonly string[]): Map<string, MarkMatch> {
	const exact = new Map(marks.map((mark) => [mark.trim(), mark]));
	const loose = new Map<string, string[]>();
	for (const mark of marks) append(loose, bare(mark), mark);
	const distinct = [...new Set(names)];
	const taken = new Set(distinct.flatMap((name) => exact.get(name.trim()) ?? []));
	const rivals = new Map<string, string[]>();
	for (const name of distinct) if (!exact.has(name.trim())) append(rivals, bare(name), name.trim());
	const found = new Map<string, MarkMatch>();
	for (const name of distinct) {
		const same = exact.get(name.trim());
		if (same !== undefined) {
			found.set(name, { mark: same, isLoose: false });
			continue;
		}
		const key = bare(name);
		const [mark, ...others] = loose.get(key) ?? [];
		const isOnlyName = new Set(rivals.get(key)).size === 1;
		if (key === '' || mark === undefined || others.length > 0 || taken.has(mark) || !isOnlyName) continue;
		found.set(name, { mark, isLoose: true });
	}
	return found;
}

/** Codes by which the field marks a point as a target (common practice): control point, benchmark, target, backsight, check. */
export const targetCodes = ['CP', 'BM', 'TP', 'BS', 'CHK', 'TGT'] as const;

/** True for a code that is one of these words, alone or followed by figures or a separator: "CP", "bm-2", "TGT 4". */
export function isTargetCode(code: string): boolean {
	const word = /^\s*([a-z]+)(?![a-z])/i.exec(code)?.[1]?.toUpperCase();
	return targetCodes.some((known) => known === word);
}

function bare(name: string): string {
	return name.toLowerCase().replace(/[\s\-_./]+/g, '');
}

function append(lists: Map<string, string[]>, key: string, value: string): void {
	const list = lists.get(key);
	if (list === undefined) lists.set(key, [value]);
	else list.push(value);
}
