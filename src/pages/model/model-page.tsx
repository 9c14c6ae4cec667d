import { useMutation, useQuery, useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { useNavigate, useParams } from 'react-router-dom';
import { unitInWords, usualUnitsM } from '#shared/model/ifc-units.ts';
import { mayWith } from '#shared/permissions.ts';
import { ChooseReading, unitOption } from '#src/features/model/choose-reading.tsx';
import { ModelUpload } from '#src/features/model/model-upload.tsx';
import { PlacingPreview } from '#src/features/model/placing-preview.tsx';
import { RevisionRow } from '#src/features/model/revision-row.tsx';
import { api, client } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** The site's models and their revisions; a new one is dropped here. */
export default function ModelPage() {
	const { siteId = '' } = useParams();
	const navigate = useNavigate();
	const [{ data: site }, { data: models }, { data: me }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.model.list.queryOptions({ input: { siteId } }),
			api.account.me.queryOptions(),
		],
	});
	const mayWrite = mayWith(site.roles, 'model.write');
	const mayFollow = mayWith(site.roles, 'job.see');
	const headline = headlineOf(models);
	return (
		<>
			<Strip
				items={[
					counted(models.length, 'model'),
					counted(
						models.reduce((sum, model) => sum + model.revisions.length, 0),
						'revision',
					),
				]}
			/>
			<Headline title="Model">{headline}</Headline>
			<div className="grid gap-6 desk:grid-cols-[minmax(0,1fr)_minmax(0,26rem)]">
				<div className="flex min-w-0 flex-col gap-6">
					{models.length === 0 && (
						<Notice kind="empty" title="The design comes first">
							{mayWrite
								? 'Drop the IFC model: its elements become the places where deviation is asked for.'
								: 'The project engineer brings the IFC model.'}
						</Notice>
					)}
					{models.map((model) => (
						<section key={model.modelId} aria-label={model.name} className="flex flex-col gap-3">
							<h2 className="m-0 text-h2 font-strong">{model.name}</h2>
							{model.revisions.map((revision) => (
								<RevisionRow
									key={revision.revisionId}
									siteId={siteId}
									revision={revision}
									isNewest={revision === model.revisions.find(({ state }) => state === 'ready')}
									timeZone={site.timeZone}
									mayFollow={mayFollow}
									act={mayWrite && revision === model.revisions[0] && <UnitOfUnsaid siteId={siteId} modelId={model.modelId} />}
								/>
							))}
						</section>
					))}
				</div>
				<section aria-label="Bring a model" className="flex flex-col gap-3">
					<h2 className="m-0 text-h2 font-strong">{models.length === 0 ? 'Bring the model' : 'Bring a newer one'}</h2>
					{mayWrite && me ? (
						<ModelUpload
							key={models.map((model) => model.modelId).join()}
							siteId={siteId}
							userId={me.userId}
							models={models}
							onBegun={() => navigate(`/sites/${siteId}/model`)}
						/>
					) : (
						<p className="m-0 text-second">Models are brought by the project engineer.</p>
					)}
					{mayWrite && models.length > 0 && (
						<div className="mt-4">
							<PlacingPreview siteId={siteId} />
						</div>
					)}
				</section>
			</div>
		</>
	);
}

/** Where a file names no length unit: choose it, then read again. */
function UnitOfUnsaid({ siteId, modelId }: { siteId: string; modelId: string }) {
	const queries = useQueryClient();
	const said = useQuery(api.model.saidOfReading.queryOptions({ input: { siteId, modelId } })).data;
	const again = useMutation({
		mutationFn: () => client.model.readAgain({ siteId, modelId }),
		onSuccess: () => queries.invalidateQueries({ queryKey: api.model.key() }),
	});
	return (
		<>
			<ChooseReading siteId={siteId} modelId={modelId} options={usualUnitsM.map(unitOption)} />
			{said?.unit && (
				<Button weight="act" isBusy={again.isPending} onClick={() => again.mutate()}>
					Read it in {unitInWords(said.unit.metresPerUnit)}
				</Button>
			)}
		</>
	);
}

function headlineOf(
	models: readonly {
		name: string;
		revisions: readonly { number: number; state: string; elementCount: number; checkpointCount: number }[];
	}[],
) {
	if (models.length === 0) return 'There is no model yet: nothing can be checked';
	const reading = models.flatMap((model) => model.revisions).filter((revision) => revision.state === 'reading').length;
	if (reading > 0) return `${counted(reading, 'revision')} ${reading === 1 ? 'is' : 'are'} being read`;
	const ready = models.flatMap((model) => model.revisions.filter((revision) => revision.state === 'ready').slice(0, 1));
	if (ready.length === 0) return 'No model could be read yet';
	const elements = ready.reduce((sum, revision) => sum + revision.elementCount, 0);
	const checkpoints = ready.reduce((sum, revision) => sum + revision.checkpointCount, 0);
	return `${counted(elements, 'element')} can be checked at ${counted(checkpoints, 'place')}`;
}
