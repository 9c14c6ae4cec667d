import { memo, useMemo } from 'react';
import type { JudgedRow } from '#shared/check/derived/derived-row.ts';
import { count } from '#src/lib/format.ts';
import { Chip } from '#src/ui/chip.tsx';
import { Glyph } from '#src/ui/glyph.tsx';
import { countsOf, glyphOfFilter, type VerdictFilter, verdictFilters, wordOfFilter } from './verdict-filter.ts';

interface VerdictChipsProps {
	/** Those that the other filters let through: the chips count these. */
	deviations: readonly JudgedRow[];
	shown: readonly VerdictFilter[];
	onChange: (shown: readonly VerdictFilter[]) => void;
}

/** What is well stands first, as on the wide rod what recedes lies behind. */
const order: readonly VerdictFilter[] = ['within', ...verdictFilters.filter((filter) => filter !== 'within')];

/** One chip a verdict with its count; pressed = shown. Verdicts that do not occur have none. */
export const VerdictChips = memo(function VerdictChips({ deviations, shown, onChange }: VerdictChipsProps) {
	const chips = useMemo(() => {
		const counts = countsOf(deviations);
		return order
			.filter((filter) => counts[filter] > 0)
			.map((filter) => ({ filter, text: `${count(counts[filter])} ${wordOfFilter(filter, deviations)}` }));
	}, [deviations]);
	return chips.map(({ filter, text }) => (
		<Chip
			key={filter}
			isOn={shown.includes(filter)}
			onChange={(isOn) => onChange(isOn ? [...shown, filter] : shown.filter((other) => other !== filter))}
			glyph={<Glyph kind={glyphOfFilter[filter]} />}
		>
			{text}
		</Chip>
	));
});
