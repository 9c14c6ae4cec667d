import { count } from '#src/lib/format.ts';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import type { PlannedGroup } from './survey-plan.ts';

/** What each kind of checkpoint could be known to, against the tolerance it has: the kinds that could never be decided first. */
export function ExpectedTable({ groups }: { groups: readonly PlannedGroup[] }) {
	const ordered = [...groups].sort((a, b) => (a.capability ?? 1e9) - (b.capability ?? 1e9) || a.name.localeCompare(b.name));
	return (
		<div ref={scrollStop} className="sheet overflow-x-auto">
			<table className="w-full border-collapse">
				<thead className="border-b border-ink text-small text-second">
					<tr>
						<th scope="col" className="px-3 py-2.5 text-left font-medium">
							Checkpoints
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium max-tablet:hidden">
							Number
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium max-tablet:hidden">
							± usual, mm
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium">
							± worst, mm
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium max-tablet:hidden">
							Tolerance, mm
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium">
							Cm
						</th>
						<th scope="col" className="px-3 py-2.5 text-left font-medium">
							Can it be decided?
						</th>
					</tr>
				</thead>
				<tbody>
					{ordered.map((group) => (
						<tr key={group.name} className="border-b border-hair">
							<th scope="row" className="h-11 px-3 text-left font-strong">
								{group.name}
							</th>
							<td className="px-2 text-right max-tablet:hidden">{count(group.count)}</td>
							<td className="px-2 text-right max-tablet:hidden">{group.medianExpandedMm.toFixed(1)}</td>
							<td className="px-2 text-right">{group.worstExpandedMm.toFixed(1)}</td>
							<td className="px-2 text-right max-tablet:hidden">
								{group.toleranceMm === null ? '–' : Number(group.toleranceMm.toFixed(1))}
							</td>
							<td className="px-2 text-right">{group.capability === null ? '–' : group.capability.toFixed(1)}</td>
							<td className="px-3 py-2">{decidedWords(group)}</td>
						</tr>
					))}
				</tbody>
			</table>
		</div>
	);
}

function decidedWords({ capability, neverDecided, doubtful, count: all }: PlannedGroup) {
	if (capability === null) return <span className="text-second">no rule sets two sides</span>;
	if (neverDecided > 0) return <b>{neverDecided === all ? 'never within' : `${count(neverDecided)} never within`}</b>;
	if (doubtful > 0) return `near its limits not${doubtful === all ? '' : ` (${count(doubtful)})`}`;
	return 'yes';
}
