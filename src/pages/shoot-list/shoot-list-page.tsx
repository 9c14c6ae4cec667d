import { useMutation, useSuspenseQuery } from '@tanstack/react-query';
import type { ShootListEntry } from '#shared/flag/contract.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted, metres, plainMm } from '#src/lib/format.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { useAddressId } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';
import { type Column, Table } from '#src/ui/table.tsx';

const whyWords: Record<ShootListEntry['why'], string> = {
	'put-right': 'put right',
	'too-close': 'too close to call',
	voided: 'voided',
	'not-measured': 'not measured',
};
const order: readonly ShootListEntry['why'][] = ['put-right', 'too-close', 'voided', 'not-measured'];

const columns: Column<ShootListEntry>[] = [
	{
		key: 'where',
		head: 'Where',
		isRowHead: true,
		cell: ({ elementMark, label }) => (
			<span className="block min-w-0 leading-tight">
				<span className="block truncate font-strong">{elementMark}</span>
				<span className="block truncate text-small text-second">{label}</span>
			</span>
		),
	},
	{
		key: 'why',
		head: 'Why',
		cell: ({ why, sigmaMm }) => `${whyWords[why]}${sigmaMm === null ? '' : `, σ ${plainMm(sigmaMm)} mm`}`,
	},
	{ key: 'pour', head: 'Pour', onlyFrom: 'tablet', widthPx: 80, cell: ({ pours }) => pours.join(', ') || '–' },
	...(['E', 'N', 'H'] as const).map(
		(axis, index): Column<ShootListEntry> => ({
			key: axis,
			head: `${axis}, m`,
			align: 'end',
			onlyFrom: 'cabin',
			widthPx: 110,
			cell: ({ designPoint }) => <span className="font-mono">{metres(designPoint[index] ?? null)}</span>,
		}),
	),
];

/** What is to be measured next, and the same as a list for the field. */
export default function ShootListPage() {
	const siteId = useAddressId('siteId');
	const { data: list } = useSuspenseQuery(api.flag.shootList.queryOptions({ input: { siteId } }));
	const { data: surveys } = useSuspenseQuery(api.survey.list.queryOptions({ input: { siteId } }));
	const newest = surveys[0];
	const csv = useMutation({
		mutationFn: async (isInSurveyFrame: boolean) => {
			const fitId = isInSurveyFrame && newest ? await adoptedFitOf(siteId, newest.surveyId) : null;
			const blob = await client.flag.shootCsv({ siteId, fitId });
			saveBlob(blob, blob instanceof File ? blob.name : 'shoot-list.csv');
		},
	});
	const groups = order
		.map((why) => ({ key: why, head: whyWords[why], rows: list.filter((entry) => entry.why === why) }))
		.filter(({ rows }) => rows.length > 0)
		.map(({ key, head, rows }) => ({ key, head: `${counted(rows.length, 'point')} ${head}`, rows }));
	return (
		<>
			<Strip items={['of the newest revision and all published checks']} />
			<Headline
				title="Shoot list"
				acts={
					list.length > 0 && (
						<>
							<Button onClick={() => csv.mutate(false)} isBusy={csv.isPending}>
								CSV, design frame
							</Button>
							<Button onClick={() => csv.mutate(true)} isBusy={csv.isPending} whyNot={newest ? null : 'No survey is stored yet.'}>
								CSV, frame of survey {newest?.number ?? ''}
							</Button>
						</>
					)
				}
			>
				{list.length === 0 ? 'Nothing is to be measured' : `${counted(list.length, 'point')} to measure`}
			</Headline>
			{csv.error && <Notice kind="wrong" title={refusalOf(csv.error).message} />}
			{list.length > 0 && (
				<Table
					caption="Points to measure"
					columns={columns}
					groups={groups}
					keyOf={({ checkpointId, globalId }) => `${globalId} ${checkpointId}`}
					scrollClass="max-h-[max(20rem,calc(100dvh-14rem))]"
					rowHeightPx={52}
				/>
			)}
		</>
	);
}

/** The adopted fit of the survey's first set-up that has one; its frame is the instrument's. */
async function adoptedFitOf(siteId: string, surveyId: string): Promise<string | null> {
	const { setups } = await client.survey.get({ siteId, surveyId });
	for (const { setupId } of setups) {
		const fits = await client.fit.list({ siteId, setupId });
		const adopted = fits.find(({ state }) => state === 'adopted');
		if (adopted) return adopted.fitId;
	}
	return null;
}
