import { useSuspenseQueries } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import { ruleSentence } from '#shared/tolerance/rule-sentence.ts';
import { api } from '#src/lib/api.ts';
import { counted, isoMoment } from '#src/lib/format.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { SheetActs } from './sheet-acts.tsx';
import { SheetWeighed } from './sheet-weighed.tsx';

/** A tolerance sheet, rule by rule in words: the first that fits decides. */
export default function SheetPage() {
	const { siteId = '', sheetId = '' } = useParams();
	const [{ data: site }, { data: sheet }] = useSuspenseQueries({
		queries: [api.site.get.queryOptions({ input: { siteId } }), api.tolerance.get.queryOptions({ input: { siteId, sheetId } })],
	});
	return (
		<>
			<Strip
				items={[
					`revision ${sheet.revision}`,
					sheet.state,
					sheet.issueReason && `“${sheet.issueReason}”`,
					sheet.issuedBy && sheet.issuedAt && `issued by ${sheet.issuedBy}, ${isoMoment(sheet.issuedAt, site.timeZone)}`,
				]}
			/>
			<Headline
				title={sheet.name}
				acts={<SheetActs siteId={siteId} sheet={sheet} />}
			>{`${sheet.name}: ${counted(sheet.ruleCount, 'rule')}, ${sheet.decision}`}</Headline>
			<p className="mt-0 max-w-[75ch]">
				{sheet.decision === 'guarded'
					? 'Guarded (JCGM 106, k = 2): within means all of the deviation ± U lies inside its limits, outside means all of it lies beyond one; anything else is too close to call.'
					: 'Simple: within or outside by the deviation alone. Shared risk: on the limit up to 50 % of such verdicts are wrong.'}{' '}
				The first rule that fits decides.
			</p>
			<ol className="m-0 flex list-none flex-col gap-3 p-0">
				{sheet.sheet.rules.map((rule, index) => (
					<li key={rule.id} className="sheet flex gap-4 px-4.5 py-3.5">
						<span className="w-6 text-right text-second">{index + 1}</span>
						<span className="min-w-0">
							<span className="block font-strong">{ruleSentence(rule)}</span>
							<span className="block text-second">
								{[rule.source, rule.clause, rule.edition].filter(Boolean).join(', ') || 'No source is named.'}
							</span>
						</span>
					</li>
				))}
			</ol>
			<SheetWeighed siteId={siteId} sheet={sheet.sheet} />
			<p className="max-w-[75ch] text-second">Check against your contract documents; the engineer of record decides.</p>
		</>
	);
}
