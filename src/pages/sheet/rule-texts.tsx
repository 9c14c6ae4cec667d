import { useQuery } from '@tanstack/react-query';
import { ruleSentence } from '#shared/tolerance/rule-sentence.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { isDerived } from '#src/features/tolerance/rule-words.ts';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';

/** The rules of a sheet in words, with their source and how many checkpoints each decides. */
export function RuleTexts({ siteId, sheet }: { siteId: string; sheet: ToleranceSheet }) {
	const { data: weight } = useQuery(api.tolerance.weigh.queryOptions({ input: { siteId, sheet } }));
	return (
		<ol className="m-0 flex list-none flex-col gap-3 p-0">
			{sheet.rules.map((rule, index) => (
				<li key={rule.id} className="sheet flex gap-4 px-4.5 py-3.5">
					<span className="w-6 text-right text-second">{index + 1}</span>
					<span className="min-w-0">
						<span className="block font-strong">{ruleSentence(rule)}</span>
						<span className="block text-second">
							{[rule.source, rule.clause, rule.edition].filter(Boolean).join(', ') || 'No source is named.'}
							{weight && !isDerived(rule.match.characteristic ?? '') && ` · decides ${counted(weight.decides[index] ?? 0, 'checkpoint')}`}
						</span>
					</span>
				</li>
			))}
		</ol>
	);
}
