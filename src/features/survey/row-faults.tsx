import type { RowFault } from '#shared/survey/point-table-schema.ts';
import { count, counted } from '#src/lib/format.ts';
import { Notice } from '#src/ui/notice.tsx';

interface RowFaultsProps {
	table: { faults: readonly RowFault[]; faultCount: number; rowCount: number };
}

const shownAtOnce = 8;

/** Which rows cannot be read, and why, in the file's own row numbers. */
export function RowFaults({ table }: RowFaultsProps) {
	const { faults, faultCount, rowCount } = table;
	return (
		<Notice kind="wrong" title={faultCount === 1 ? (faults[0]?.message ?? '') : `${count(faultCount)} rows cannot be read`}>
			{faultCount > 1 && (
				<>
					<ul className="m-0 flex list-none flex-col gap-0.5 p-0 text-ink">
						{faults.slice(0, shownAtOnce).map((fault) => (
							<li key={fault.message}>{fault.message}</li>
						))}
					</ul>
					{faultCount > shownAtOnce && (
						<details className="mt-1">
							<summary className="min-h-9">
								{faultCount > faults.length
									? `The next ${faults.length - shownAtOnce} of ${count(faultCount)}`
									: `${faultCount - shownAtOnce} more`}
							</summary>
							<ul className="m-0 flex list-none flex-col gap-0.5 p-0 text-ink">
								{faults.slice(shownAtOnce).map((fault) => (
									<li key={fault.message}>{fault.message}</li>
								))}
							</ul>
						</details>
					)}
				</>
			)}
			<p className="mt-2 mb-0">{counted(rowCount, 'row')} read, none stored yet. Put them right in the file and drop it again.</p>
		</Notice>
	);
}
