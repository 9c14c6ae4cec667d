import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useId, useState } from 'react';
import { type CheckpointDensity, checkpointDensity } from '#shared/site/site-settings.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { count } from '#src/lib/format.ts';
import { useJob } from '#src/lib/job-progress.ts';
import { Button } from '#src/ui/button.tsx';
import { FieldFrame, numberOf } from '#src/ui/field.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';

const inputClass =
	'block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-right font-mono text-ink pointer-coarse:min-h-12';
const kindWords = { plan: 'Plan of columns, bolts, plates', face: 'Faces and edges', level: 'Levels' } as const;
const kindsInOrder = ['plan', 'face', 'level'] as const;

/** How close checkpoints lie and which kinds there are: a setting of the site, with what it would change on the newest revisions. */
export function PlacingPreview({ siteId }: { siteId: string }) {
	const kept = useQuery(api.site.settings.queryOptions({ input: { siteId } })).data;
	return kept === undefined ? null : <Placing key={kept.version} siteId={siteId} before={kept.settings.checkpoints} />;
}

function Placing({ siteId, before }: { siteId: string; before: CheckpointDensity }) {
	const queries = useQueryClient();
	const [faceId, levelId] = [useId(), useId()];
	const [typed, setTyped] = useState({ face: String(before.faceSpacingM), level: String(before.levelSpacingM) });
	const [kinds, setKinds] = useState(before.kinds);
	const parsed = checkpointDensity.safeParse({
		faceSpacingM: numberOf(typed.face, false),
		levelSpacingM: numberOf(typed.level, false),
		kinds,
	});
	const [begun, setBegun] = useState<{ previewId: string; jobId: string } | null>(null);
	const [isCounted, setCounted] = useState(false);
	const ask = useMutation({
		mutationFn: (placing: CheckpointDensity) => client.model.previewPlacing({ siteId, placing }),
		onSuccess: (next) => {
			setCounted(false);
			setBegun(next);
		},
	});
	const { job, cancel } = useJob(siteId, begun?.jobId ?? null, ({ state }) => setCounted(state === 'done'));
	const preview = useQuery({
		...api.model.placingPreview.queryOptions({ input: { siteId, previewId: begun?.previewId ?? '' } }),
		enabled: isCounted && begun !== null,
	}).data;
	const keep = useMutation({
		mutationFn: async (checkpoints: CheckpointDensity) => {
			const { settings, version } = await client.site.settings({ siteId });
			return client.site.saveSettings({ siteId, settings: { ...settings, checkpoints }, version });
		},
		onSuccess: () => Promise.all([api.site.key(), api.model.key()].map((queryKey) => queries.invalidateQueries({ queryKey }))),
	});
	const why = parsed.success ? null : (parsed.error.issues[0]?.message ?? 'Write two distances, in metres.');
	const isRunning = job !== null && (job.state === 'waiting' || job.state === 'running');
	const failed = ask.error ?? keep.error;
	const change = (next: () => void): void => {
		setBegun(null);
		next();
	};
	return (
		<section aria-label="How close checkpoints lie" className="flex flex-col gap-3">
			<h2 className="m-0 text-h2 font-strong">How close checkpoints lie</h2>
			<div className="grid grid-cols-2 gap-3">
				<FieldFrame id={faceId} label="On faces, m" hint="The widest step">
					<input
						id={faceId}
						inputMode="decimal"
						value={typed.face}
						onChange={({ currentTarget: { value } }) => change(() => setTyped((was) => ({ ...was, face: value })))}
						className={inputClass}
					/>
				</FieldFrame>
				<FieldFrame id={levelId} label="On levels, m" hint="The widest step">
					<input
						id={levelId}
						inputMode="decimal"
						value={typed.level}
						onChange={({ currentTarget: { value } }) => change(() => setTyped((was) => ({ ...was, level: value })))}
						className={inputClass}
					/>
				</FieldFrame>
			</div>
			<fieldset className="m-0 flex flex-col border-0 p-0">
				<legend className="mb-1 p-0 font-medium">Kinds</legend>
				{kindsInOrder.map((kind) => (
					<label key={kind} className="flex min-h-9 items-center gap-2.5 pointer-coarse:min-h-12">
						<input
							type="checkbox"
							className="size-5 accent-ink"
							checked={kinds[kind]}
							onChange={({ currentTarget: { checked } }) => change(() => setKinds((was) => ({ ...was, [kind]: checked })))}
						/>
						{kindWords[kind]}
					</label>
				))}
			</fieldset>
			{isRunning ? (
				<Progress doing={job.doing} done={job.done} of={job.of} onCancel={cancel} />
			) : (
				<div className="flex flex-wrap gap-2.5">
					<Button isBusy={ask.isPending} whyNot={why} onClick={() => parsed.success && ask.mutate(parsed.data)}>
						Count what it would change
					</Button>
					<Button isBusy={keep.isPending} whyNot={why} onClick={() => parsed.success && keep.mutate(parsed.data)}>
						Keep it for later readings
					</Button>
				</div>
			)}
			{(failed || job?.state === 'failed') && (
				<Notice kind="wrong" title="That was not done.">
					{failed ? refusalOf(failed).message : job?.reason}
				</Notice>
			)}
			{preview?.models?.map(({ modelId, name, revision, classes }) => (
				<table key={modelId} className="w-full border-collapse">
					<caption className="pb-1 text-left font-medium">
						{name}, revision {revision}
					</caption>
					<thead>
						<tr className="border-b border-rule text-small text-second">
							<th className="py-1 text-left font-normal">Class</th>
							<th className="py-1 text-right font-normal">Now</th>
							<th className="py-1 text-right font-normal">Then</th>
						</tr>
					</thead>
					<tbody>
						{classes.map((row) => (
							<tr key={row.class} className="border-b border-hair">
								<td className="py-1">{row.class.replace(/^Ifc/, '')}</td>
								<td className="py-1 text-right font-mono">{count(row.before)}</td>
								<td className="py-1 text-right font-mono">{count(row.after)}</td>
							</tr>
						))}
						<tr className="font-strong">
							<td className="py-1">All</td>
							<td className="py-1 text-right font-mono">{count(classes.reduce((sum, { before: each }) => sum + each, 0))}</td>
							<td className="py-1 text-right font-mono">{count(classes.reduce((sum, { after }) => sum + after, 0))}</td>
						</tr>
					</tbody>
				</table>
			))}
			<p className="m-0 text-small text-second">
				It takes effect with the next reading. Checks already made stay, and checkpoints that stay keep what was said of them.
			</p>
		</section>
	);
}
