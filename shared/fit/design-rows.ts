/**
 * What small changes of the seven unknowns do to a place, 3 × 7, row by row: ∂(S·R·x + t)/∂(shift E, N, H, turns about E, N, H after R, relative scale).
 * @param qe, qn, qh S·R·(x − origin): the place as seen from where the shift is taken, control frame, metres
 */
export function designRows(qe: number, qn: number, qh: number): Float64Array {
	return Float64Array.of(1, 0, 0, 0, qh, -qn, qe, 0, 1, 0, -qh, 0, qe, qn, 0, 0, 1, qn, -qe, 0, qh);
}
