import type { CheckDetail } from '#shared/check/contract.ts';
import { counted } from '#src/lib/format.ts';

/** What in the newest check belongs to no row: "In no pour", "No rule". */
export function homeless(check: CheckDetail): { words: string; why: string }[] {
	const loose = check.elements.filter((element) => element.pourIds.length === 0).length;
	const lawless = check.deviations.filter((deviation) => deviation.verdict === 'no-tolerance').length;
	return [
		...(loose > 0 ? [{ words: 'In no pour', why: counted(loose, 'element') }] : []),
		...(lawless > 0 ? [{ words: 'No rule', why: counted(lawless, 'point') }] : []),
	];
}
