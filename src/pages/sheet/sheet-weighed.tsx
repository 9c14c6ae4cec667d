import { useQuery } from '@tanstack/react-query';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, limitsMm, signedMm } from '#src/lib/format.ts';
import { LoadingLines, Notice } from '#src/ui/notice.tsx';

const shown = 30;

/** What a sheet would decide and change on the newest revisions: said before it is issued. */
export function SheetWeighed({ siteId, sheet }: { siteId: string; sheet: ToleranceSheet }) {
	const { data: weight, error } = useQuery(api.tolerance.weigh.queryOptions({ input: { siteId, sheet } }));
	if (error) return <Notice kind="wrong" title={refusalOf(error).message} />;
	if (!weight) return <LoadingLines what="What the sheet decides" rows={3} />;
	return (
		<section aria-labelledby="sheet-weighed" className="mt-5">
			<h2 id="sheet-weighed" className="m-0 mb-2 text-h2 font-strong">
				{weight.changeCount === 0 ? 'No verdict is changed by it' : `${counted(weight.changeCount, 'verdict')} changed by it`}
			</h2>
			<ol className="m-0 pl-5 text-second">
				{weight.decides.map((count, index) => (
					<li key={sheet.rules[index]?.id ?? index}>decides {counted(count, 'checkpoint')}</li>
				))}
			</ol>
			<p className="mb-0">
				{weight.undecidedCount === 0
					? 'Every checkpoint of the newest revisions has a rule.'
					: `No rule decides ${counted(weight.undecidedCount, 'checkpoint')}: ${[...new Set(weight.undecided.map(({ mark }) => mark))].slice(0, 8).join(', ')}${weight.undecidedCount > 8 ? ' …' : ''}`}
			</p>
			{weight.faults.map(({ ruleIndex, mark, fault }) => (
				<p key={`${ruleIndex} ${fault}`} className="mb-0 font-medium">
					Rule {ruleIndex + 1}{' '}
					{fault === 'crossed'
						? `comes out with its lower limit above its upper one at ${mark}`
						: `asks for the ${fault}, which ${mark} has not`}
					.
				</p>
			))}
			<ul className="m-0 mt-2 pl-5">
				{weight.changes.slice(0, shown).map((change) => (
					<li key={change.checkpointId}>
						<b>{change.mark}</b>, {change.label}: {signedMm(change.deviationMm)} mm, was {limitsMm(change.wasMm)}, now{' '}
						{limitsMm(change.isMm)}: {change.was.replaceAll('-', ' ')} becomes {change.is.replaceAll('-', ' ')}
					</li>
				))}
				{weight.changeCount > shown && <li>and {weight.changeCount - shown} more</li>}
			</ul>
		</section>
	);
}
