import { unquote } from './scan-points.ts';

/** One record cut into cells, quotes taken off. */
export function splitRecord(line: string, delimiter: string): string[] {
	const cells: string[] = [];
	let at = 0;
	const isBlank = delimiter === ' ';
	while (at <= line.length) {
		if (isBlank) while (line[at] === ' ' || line[at] === '\t') at++;
		const start = at;
		let lead = at;
		while (line[lead] === ' ') lead++;
		if (line[lead] === '"') {
			at = lead + 1;
			while (at < line.length && (line[at] !== '"' || line[at + 1] === '"')) at += line[at] === '"' ? 2 : 1;
		}
		while (at < line.length && line[at] !== delimiter && !(isBlank && line[at] === '\t')) at++;
		cells.push(unquote(line.slice(start, at).trim()).trim());
		at++;
		if (isBlank && line.slice(at).trim() === '') break;
	}
	return cells;
}
