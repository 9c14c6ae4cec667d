import { useMutation, useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { Link, useNavigate } from 'react-router-dom';
import { extractCaution } from '#shared/tolerance/published-extracts.ts';
import type { ToleranceRule } from '#shared/tolerance/sheet-schema.ts';
import { starterSheet } from '#shared/tolerance/starter-sheet.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, isoMoment } from '#src/lib/format.ts';
import { useAddressId, useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** The site's tolerance sheets, newest first, and beginning one. */
export default function SheetsPage() {
	const siteId = useAddressId('siteId');
	const { timeZone } = useSite();
	const mayWrite = useMay('tolerance.write');
	const queries = useQueryClient();
	const navigate = useNavigate();
	const input = { siteId };
	const [{ data: sheets }, { data: agreed }] = useSuspenseQueries({
		queries: [api.tolerance.list.queryOptions({ input }), api.site.settings.queryOptions({ input })],
	});
	const { defaultDecision } = agreed.settings;
	const begin = useMutation({
		mutationFn: ({ name, rules }: { name: string; rules: ToleranceRule[] }) =>
			client.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: { name, decision: defaultDecision, rules } }),
		onSuccess: async ({ sheetId }) => {
			navigate(`/sites/${siteId}/sheets/${sheetId}`);
			await queries.invalidateQueries({ queryKey: api.tolerance.key() });
		},
	});
	const issued = sheets.find(({ state }) => state === 'issued');
	return (
		<>
			<Strip items={[counted(sheets.length, 'sheet'), `new ones begin ${defaultDecision}`]} />
			<Headline title="Tolerance sheets">
				{issued === undefined
					? 'No tolerance sheet is issued: nothing can be judged'
					: `What is built is judged by ${issued.name}, revision ${issued.revision}`}
			</Headline>
			{begin.error && <Notice kind="wrong" title={refusalOf(begin.error).message} />}
			{sheets.length === 0 && (
				<Notice kind="empty" title={mayWrite ? 'Begin the first sheet' : 'The project engineer issues tolerance sheets'} />
			)}
			{sheets.length > 0 && (
				<ul className="sheet m-0 list-none p-0">
					{sheets.map((sheet) => (
						<li key={sheet.sheetId} className="border-b border-b-hair last:border-b-0">
							<Link
								to={`/sites/${siteId}/sheets/${sheet.sheetId}`}
								className="grid min-h-14 gap-x-6 gap-y-1 px-4 py-3 text-ink no-underline hover:bg-ground tablet:grid-cols-[9rem_1fr]"
							>
								<span>
									<b>Revision {sheet.revision}</b>
									<span className="block text-small text-second">{sheet.state}</span>
								</span>
								<span className="min-w-0">
									{sheet.name}: {counted(sheet.ruleCount, 'rule')}, {sheet.decision}
									{sheet.issuedBy !== null && sheet.issuedAt !== null && (
										<span className="block text-small text-second">
											issued by {sheet.issuedBy}, {isoMoment(sheet.issuedAt, timeZone)}
										</span>
									)}
								</span>
							</Link>
						</li>
					))}
				</ul>
			)}
			{mayWrite && (
				<section aria-labelledby="begin-sheet" className="mt-5">
					<h2 id="begin-sheet" className="m-0 text-h2 font-strong">
						Begin a sheet
					</h2>
					<p className="max-w-[75ch]">
						The starting points are extracts of published tolerances with their sources, to change and to add to. {extractCaution} To go on
						from a sheet that is issued, open it.
					</p>
					<div className="flex flex-wrap gap-2.5">
						<Button
							weight={issued === undefined ? 'act' : 'quiet'}
							isBusy={begin.isPending}
							onClick={() => begin.mutate({ name: starterSheet.name, rules: starterSheet.rules })}
						>
							Begin with the starting points
						</Button>
						<Button isBusy={begin.isPending} onClick={() => begin.mutate({ name: 'New sheet', rules: [] })}>
							Begin an empty one
						</Button>
					</div>
				</section>
			)}
		</>
	);
}
