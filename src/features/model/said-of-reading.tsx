import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { useNavigate } from 'react-router-dom';
import { unitInWords } from '#shared/model/ifc-units.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { useMay } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { PressChip } from '#src/ui/chip.tsx';
import { Notice } from '#src/ui/notice.tsx';

interface SaidOfReadingProps {
	siteId: string;
	modelId: string;
	/** The newest revision that is read. */
	revisionId: string;
}

/** What people said of how the model is read, elements that seem to be those of before, and the act that brings it in: reading again. */
export function SaidOfReading({ siteId, modelId, revisionId }: SaidOfReadingProps) {
	const queries = useQueryClient();
	const navigate = useNavigate();
	const [mayRead, mayName] = [useMay('model.write'), useMay('mark.write')];
	const said = useQuery(api.model.saidOfReading.queryOptions({ input: { siteId, modelId } })).data;
	const same = useQuery(api.model.sameElements.queryOptions({ input: { siteId, revisionId } })).data ?? [];
	const afterwards = async (): Promise<void> => {
		await queries.invalidateQueries({ queryKey: api.model.key() });
		navigate(`/sites/${siteId}/model`);
	};
	const again = useMutation({ mutationFn: () => client.model.readAgain({ siteId, modelId }), onSuccess: afterwards });
	const accept = useMutation({
		mutationFn: () => client.model.acceptSame({ siteId, revisionId, count: same.length }),
		onSuccess: afterwards,
	});
	const remove = useMutation({
		mutationFn: (axisId: string) => client.model.removeAxis({ siteId, modelId, axisId }),
		onSuccess: () => queries.invalidateQueries({ queryKey: api.model.saidOfReading.key() }),
	});
	const failed = again.error ?? accept.error ?? remove.error;
	if (said === undefined) return null;
	const { unit, mapScale, axes, knownElements, isReadAnew } = said;
	const lines = [
		unit && `Read in ${unitInWords(unit.metresPerUnit)}: ${unit.reason} (${unit.by})`,
		mapScale &&
			`The map scale ${mapScale.choice === 'as-written' ? 'as written' : 'by the units'} holds: ${mapScale.reason} (${mapScale.by})`,
		knownElements > 0 && `${counted(knownElements, 'element')} known as before though the file renewed their GlobalIds`,
	].filter((line) => line !== null && line !== false);
	const named = same.slice(0, 6).map(({ markBefore }) => markBefore);
	return (
		<section aria-label="How it is read" className="flex flex-col gap-3">
			{same.length > 0 && (
				<Notice
					kind="note"
					title={`${counted(same.length, 'element')} stand and are shaped as before, under new GlobalIds`}
					act={
						mayRead && (
							<Button isBusy={accept.isPending} onClick={() => accept.mutate()}>
								They are the same: keep names, choices and pours
							</Button>
						)
					}
				>
					{named.join(', ')}
					{same.length > named.length && ` and ${same.length - named.length} more`}: place and shape agree to 1 mm.{' '}
					{mayRead ? 'The file is read again with that.' : 'The project engineer can accept that.'}
				</Notice>
			)}
			{isReadAnew === true && (
				<Notice
					kind="stale"
					title="More was said since this was read"
					act={
						mayRead && (
							<Button isBusy={again.isPending} onClick={() => again.mutate()}>
								Read it again
							</Button>
						)
					}
				>
					Density, unit, scale or axes were changed. The file is read again as the next revision; checks already made stay.
				</Notice>
			)}
			{failed && (
				<Notice kind="wrong" title="That was not done.">
					{refusalOf(failed).message}
				</Notice>
			)}
			{lines.length > 0 && (
				<ul className="m-0 list-none p-0">
					{lines.map((line) => (
						<li key={line} className="py-0.5">
							{line}
						</li>
					))}
				</ul>
			)}
			{axes.length > 0 && (
				<div className="flex flex-wrap items-center gap-2">
					<span className="font-medium">Axes by two picks</span>
					{axes.map(({ axisId, tag, by }) =>
						mayName ? (
							<PressChip key={axisId} onPress={() => remove.mutate(axisId)} title={`Named by ${by}. Press to take it away.`}>
								{tag} ×
							</PressChip>
						) : (
							<span key={axisId} className="font-mono">
								{tag}
							</span>
						),
					)}
				</div>
			)}
		</section>
	);
}
