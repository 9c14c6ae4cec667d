/** ln Γ(x) for x > 0: Stirling's series after lifting x over 15 (Abramowitz & Stegun 1964, 6.1.41). Relative error about 1e-15. */
export function logGamma(x: number): number {
	let shift = 0;
	let lifted = x;
	while (lifted < 15) {
		shift += Math.log(lifted);
		lifted += 1;
	}
	const square = 1 / (lifted * lifted);
	const series =
		(1 / 12 - square * (1 / 360 - square * (1 / 1260 - square * (1 / 1680 - square * (1 / 1188 - (square * 691) / 360_360))))) / lifted;
	return (lifted - 0.5) * Math.log(lifted) - lifted + 0.5 * Math.log(2 * Math.PI) + series - shift;
}
