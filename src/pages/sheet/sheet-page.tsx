import { useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { useState } from 'react';
import { useParams } from 'react-router-dom';
import { extractCaution } from '#shared/tolerance/published-extracts.ts';
import { SheetForm } from '#src/features/tolerance/sheet-form.tsx';
import { api } from '#src/lib/api.ts';
import { counted, isoMoment } from '#src/lib/format.ts';
import { useMay } from '#src/lib/session.ts';
import { Headline } from '#src/ui/headline.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { RuleTexts } from './rule-texts.tsx';
import { SheetActs } from './sheet-acts.tsx';
import { SheetWeighed } from './sheet-weighed.tsx';

/** A tolerance sheet, rule by rule in words: the first that fits decides. A draft is a form for who may write it. */
export default function SheetPage() {
	const { siteId = '', sheetId = '' } = useParams();
	const queries = useQueryClient();
	const mayWrite = useMay('tolerance.write');
	const [isUnkept, setUnkept] = useState(false);
	const [{ data: site }, { data: sheet }] = useSuspenseQueries({
		queries: [api.site.get.queryOptions({ input: { siteId } }), api.tolerance.get.queryOptions({ input: { siteId, sheetId } })],
	});
	const isForm = sheet.state === 'draft' && mayWrite;
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
				acts={<SheetActs siteId={siteId} sheet={sheet} isUnkept={isUnkept} />}
			>{`${sheet.name}: ${counted(sheet.ruleCount, 'rule')}, ${sheet.decision}`}</Headline>
			{isForm ? (
				<SheetForm
					key={sheetId}
					siteId={siteId}
					sheetId={sheetId}
					sheet={sheet.sheet}
					contentSha256={sheet.contentSha256}
					onKept={() => queries.invalidateQueries({ queryKey: api.tolerance.key() })}
					onTyped={setUnkept}
				/>
			) : (
				<>
					<p className="mt-0 max-w-[75ch]">
						{sheet.decision === 'guarded'
							? 'Guarded (JCGM 106, k = 2): within means all of the deviation ± U lies inside its limits, outside means all of it lies beyond one; anything else is too close to call.'
							: 'Simple: within or outside by the deviation alone. Shared risk: on the limit up to 50 % of such verdicts are wrong.'}{' '}
						The first rule that fits decides.
					</p>
					<RuleTexts siteId={siteId} sheet={sheet.sheet} />
				</>
			)}
			<SheetWeighed siteId={siteId} sheet={sheet.sheet} isDraft={sheet.state === 'draft'} />
			<p className="max-w-[75ch] text-second">{extractCaution}</p>
		</>
	);
}
