import { useQuery } from '@tanstack/react-query';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { changeSentence } from '#src/features/tolerance/change-sentences.ts';
import { NoRule } from '#src/features/tolerance/no-rule.tsx';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';

interface SheetWeighedProps {
	siteId: string;
	/** As it is kept. */
	sheet: ToleranceSheet;
	/** The form lists what no rule decides by itself. */
	isDraft: boolean;
}

/** What a sheet as it is kept would change on the newest revisions: said before it is issued. */
export function SheetWeighed({ siteId, sheet, isDraft }: SheetWeighedProps) {
	const { data: weight, error } = useQuery(api.tolerance.weigh.queryOptions({ input: { siteId, sheet } }));
	if (error) return <Notice kind="wrong" title={refusalOf(error).message} />;
	if (!weight) return <LoadingLines what="What the sheet decides" rows={3} />;
	return (
		<section aria-labelledby="sheet-weighed" className="mt-5 flex flex-col gap-2">
			<h2 id="sheet-weighed" className="m-0 text-h2 font-strong">
				{weight.changeCount === 0
					? isDraft
						? 'Issued as it is kept, it would change no verdict'
						: 'By it no verdict is another than it was'
					: `${isDraft ? 'Issued as it is kept, it would change' : 'By it'} ${counted(weight.changeCount, 'verdict')}${isDraft ? '' : ' are others than they were'}`}
			</h2>
			{weight.changes.map((group) => (
				<p key={`${group.was} ${group.is}`} className="m-0 max-w-[75ch]">
					{changeSentence(group)}
				</p>
			))}
			{weight.faults.map(({ ruleIndex, mark, fault }) => (
				<p key={`${ruleIndex} ${fault}`} className="m-0 font-medium">
					Rule {ruleIndex + 1}{' '}
					{fault === 'crossed'
						? `comes out with its lower limit above its upper one at ${mark}`
						: `asks for the ${fault}, which ${mark} has not`}
					.
				</p>
			))}
			{!isDraft && <NoRule weight={weight} />}
		</section>
	);
}
