const programs: readonly [RegExp, string][] = [
	[/\bEdg\//, 'Edge'],
	[/\bFirefox\//, 'Firefox'],
	[/\b(?:HeadlessChrome|Chrome|CriOS)\//, 'Chrome'],
	[/\bSafari\//, 'Safari'],
];
const systems: readonly [RegExp, string][] = [
	[/\biPhone\b/, 'iPhone'],
	[/\biPad\b/, 'iPad'],
	[/\bAndroid\b/, 'Android'],
	[/\bWindows\b/, 'Windows'],
	[/\bMac OS X\b/, 'Mac'],
	[/\bLinux\b/, 'Linux'],
];

/** "Firefox on Windows": what a browser calls itself, which it may do falsely. Pure. */
export function deviceWords(userAgent: string | null): string {
	const wordOf = (table: readonly [RegExp, string][]) => table.find(([pattern]) => pattern.test(userAgent ?? ''))?.[1];
	const system = wordOf(systems);
	const program = wordOf(programs) ?? 'A program';
	return system === undefined ? program : `${program} on ${system}`;
}
