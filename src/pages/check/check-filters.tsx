import { memo, useMemo } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import type { PourSummary } from '#shared/pour/contract.ts';
import type { CheckView } from './use-check-view.ts';

interface CheckFiltersProps {
	check: CheckDetail;
	pours: readonly PourSummary[];
	view: Pick<CheckView, 'pourId' | 'setPourId' | 'storey' | 'setStorey' | 'find' | 'setFind'>;
}

const form =
	'min-h-10 rounded-round border border-rule bg-sheet px-3.5 text-ink hover:border-ink pointer-coarse:min-h-12 data-[set=true]:border-ink data-[set=true]:shadow-[inset_0_0_0_1px_var(--color-ink)]';

/** Narrows the whole page: by pour, by storey, by a mark. */
export const CheckFilters = memo(function CheckFilters({ check, pours, view }: CheckFiltersProps) {
	const storeys = useMemo(
		() => [...new Set(check.elements.map((element) => element.storey).filter((storey) => storey !== ''))],
		[check.elements],
	);
	return (
		<div className="ml-auto flex flex-wrap gap-2 max-tablet:flex-nowrap">
			{pours.length > 0 && (
				<select
					aria-label="Pour"
					value={view.pourId ?? ''}
					data-set={view.pourId !== null}
					onChange={(event) => view.setPourId(event.target.value || null)}
					className={form}
				>
					<option value="">All pours</option>
					{pours.map((pour) => (
						<option key={pour.pourId} value={pour.pourId}>
							Pour {pour.number}
						</option>
					))}
				</select>
			)}
			{storeys.length > 1 && (
				<select
					aria-label="Storey"
					value={view.storey ?? ''}
					data-set={view.storey !== null}
					onChange={(event) => view.setStorey(event.target.value || null)}
					className={form}
				>
					<option value="">All storeys</option>
					{storeys.map((storey) => (
						<option key={storey} value={storey}>
							{storey}
						</option>
					))}
				</select>
			)}
			<input
				type="search"
				aria-label="Find an element by its mark"
				placeholder="Find C/3 …"
				value={view.find}
				data-set={view.find !== ''}
				onChange={(event) => view.setFind(event.target.value || null)}
				className={`${form} w-36 placeholder:text-second`}
			/>
		</div>
	);
});
