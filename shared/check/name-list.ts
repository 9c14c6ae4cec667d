/** "A, B, C and 4 more": names in a sentence, few enough to read. */
export function nameList(names: readonly string[], most = 5): string {
	if (names.length <= most) return names.join(', ');
	return `${names.slice(0, most).join(', ')} and ${names.length - most} more`;
}

/** "1 point", "3 points". */
export function counted(count: number, one: string, many = `${one}s`): string {
	return `${count} ${count === 1 ? one : many}`;
}
