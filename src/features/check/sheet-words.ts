/** "sheet C2", and not "sheet Sheet C2" where its name says so itself. */
export function sheetWords(name: string): string {
	return /^sheet\b/i.test(name) ? name.charAt(0).toLowerCase() + name.slice(1) : `sheet ${name}`;
}
