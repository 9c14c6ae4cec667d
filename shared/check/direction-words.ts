import { plainMm } from '../tolerance/millimetre-text.ts';

/** "5 east, 2 south"; a part that rounds to nothing is left out, "nowhere off" where both do. Millimetres, plan east and north. */
export function directionWords([eastMm, northMm]: readonly [number, number], decimals: number): string {
	const parts = [
		[eastMm, 'east', 'west'],
		[northMm, 'north', 'south'],
	] as const;
	const words = parts.flatMap(([valueMm, positive, negative]) => {
		const figure = plainMm(valueMm, decimals);
		return Number(figure) === 0 ? [] : [`${figure} ${valueMm < 0 ? negative : positive}`];
	});
	return words.length === 0 ? 'nowhere off' : words.join(', ');
}
