import { noFigure, signedMm } from '#src/lib/format.ts';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import type { StabilityTest } from './stability.ts';

/** Each mark's movement between two surveys, and the test behind it. */
export function StabilityTable({ test: { comparison, marks } }: { test: StabilityTest }) {
	const heads = ['Mark', 'East', 'North', 'Level', 'Over its σ', 'Says'];
	return (
		<>
			<div ref={scrollStop} className="sheet overflow-x-auto">
				<table className="w-full border-collapse">
					<thead className="border-b border-ink text-small text-second">
						<tr>
							{heads.map((head, index) => (
								<th
									key={head}
									scope="col"
									className={`px-3 py-2.5 font-medium ${index === 0 || index === 5 ? 'text-left' : 'text-right'} ${index === 4 ? 'max-tablet:hidden' : ''}`}
								>
									{head}
									{index > 0 && index < 4 && <span className="max-tablet:hidden">, mm</span>}
								</th>
							))}
						</tr>
					</thead>
					<tbody>
						{marks.map(({ name, isStable, movementMm, standardised }) => (
							<tr key={name} className="border-b border-hair">
								<th scope="row" className="h-11 px-3 text-left font-strong">
									{name}
								</th>
								{[0, 1, 2].map((axis) => (
									<td key={axis} className={`px-3 text-right ${isStable === false ? 'font-strong' : ''}`}>
										{movementMm ? signedMm(movementMm[axis] ?? null, 0) : noFigure}
									</td>
								))}
								<td className="px-3 text-right max-tablet:hidden">{standardised === null ? noFigure : standardised.toFixed(1)}</td>
								<td className="px-3">{isStable === null ? 'cannot be told' : isStable ? 'kept its place' : <b>moved</b>}</td>
							</tr>
						))}
					</tbody>
				</table>
			</div>
			<p className="m-0 text-second">
				After less before, mm, along the design’s axes, on the marks that kept their places. Global congruency test (Pelzer 1971):{' '}
				{comparison.statistic.toFixed(1)} on {comparison.degrees} degrees of freedom, limit {comparison.critical.toFixed(1)} at 0.1 %:{' '}
				{comparison.congruent ? 'nothing moved' : 'something moved'}.
			</p>
		</>
	);
}
