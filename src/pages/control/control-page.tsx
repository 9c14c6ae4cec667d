import { useSuspenseQueries, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useParams } from 'react-router-dom';
import { mayWith } from '#shared/permissions.ts';
import { duplicateNames } from '#shared/survey/duplicate-names.ts';
import type { PointTable } from '#shared/survey/read-point-table.ts';
import { ControlForm } from '#src/features/control/control-form.tsx';
import { ControlPointTable } from '#src/features/control/control-point-table.tsx';
import { PointFile } from '#src/features/survey/point-file.tsx';
import { useSendFile } from '#src/features/survey/send-file.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { bytes, counted, isoMoment } from '#src/lib/format.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** The marks whose positions are known, and bringing newer ones. */
export default function ControlPage() {
	const { siteId = '' } = useParams();
	const [isBringing, setIsBringing] = useState(false);
	const [wish, see] = useAddressState('set', 'push');
	const [{ data: site }, { data: sets }, { data: me }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.control.list.queryOptions({ input: { siteId } }),
			api.account.me.queryOptions(),
		],
	});
	const shown = sets.find((set) => set.controlSetId === wish) ?? sets[0];
	const mayWrite = mayWith(site.roles, 'control.write');
	return (
		<>
			<Strip
				items={[
					shown && `control ${shown.number}, ${shown.name}${shown === sets[0] ? ', newest' : ''}`,
					shown && (shown.frame === 'map' ? 'given in the map’s frame' : 'given in the design’s frame'),
					shown && `${shown.fileName}, stored by ${shown.storedBy}, ${isoMoment(shown.storedAt, site.timeZone)}`,
					shown && shown !== sets[0] && <b key="old">there is newer control</b>,
				]}
			/>
			<Headline
				title="Control"
				acts={
					!isBringing &&
					sets.length > 0 && (
						<>
							<ButtonLink to={`/sites/${siteId}/stability`}>Did a mark move?</ButtonLink>
							<Button whyNot={mayWrite ? null : 'A site engineer brings control.'} onClick={() => setIsBringing(true)}>
								Bring newer control
							</Button>
						</>
					)
				}
			>
				{shown
					? `${counted(shown.pointCount, 'mark')} are known in the design`
					: 'There is no control yet: nothing ties a survey to the design'}
			</Headline>
			<div className="flex flex-col gap-6">
				{sets.length === 0 && !mayWrite && <Notice kind="empty" title="A site engineer brings the control" />}
				{(isBringing || sets.length === 0) && mayWrite && me && (
					<BringControl
						siteId={siteId}
						userId={me.userId}
						columnOrder={site.columnOrder}
						onDone={() => setIsBringing(false)}
						mayLeave={sets.length > 0}
					/>
				)}
				{shown && <Points siteId={siteId} controlSetId={shown.controlSetId} />}
				{sets.length > 1 && (
					<section aria-label="Earlier control" className="flex flex-col gap-2">
						<h2 className="m-0 text-h2 font-strong">All control, newest first</h2>
						<ul className="m-0 flex list-none flex-col p-0">
							{sets.map((set) => (
								<li key={set.controlSetId}>
									<Button weight="plain" onClick={() => see(set === sets[0] ? null : set.controlSetId)}>
										Control {set.number}, {set.name}: {counted(set.pointCount, 'mark')}
									</Button>
								</li>
							))}
						</ul>
					</section>
				)}
			</div>
		</>
	);
}

function Points({ siteId, controlSetId }: { siteId: string; controlSetId: string }) {
	const { data: set } = useSuspenseQuery(api.control.get.queryOptions({ input: { siteId, controlSetId } }));
	return <ControlPointTable points={set.points} frame={set.frame} />;
}

interface BringControlProps {
	siteId: string;
	userId: string;
	columnOrder: 'PENZD' | 'PNEZD' | null;
	onDone: () => void;
	mayLeave: boolean;
}

function BringControl({ siteId, userId, columnOrder, onDone, mayLeave }: BringControlProps) {
	const { sent, send } = useSendFile(siteId, userId, 'control');
	return (
		<section aria-label="Bring control" className="flex max-w-[60rem] flex-col gap-4">
			<PointFile
				label="The control points, a CSV file"
				hint="Name, easting, northing, height, σ; columns in any order"
				mayLackCoordinates
				columnOrder={columnOrder}
				faultsOf={sameNames}
			>
				{({ file, reading, table }) => (
					<>
						{sent && <Progress doing={`Sending ${file.name}`} done={sent.done} of={sent.of} amount={bytes} />}
						<ControlForm
							siteId={siteId}
							suggestedName={file.name.replace(/\.[a-z]+$/i, '').slice(0, 60)}
							hasSigma={table.rows.some((row) => row.sigmaM !== null)}
							rowCount={table.rows.length}
							reading={reading}
							send={() => send(file)}
							onStored={onDone}
						/>
					</>
				)}
			</PointFile>
			{mayLeave && (
				<div>
					<Button weight="plain" onClick={onDone}>
						Leave the control as it is
					</Button>
				</div>
			)}
		</section>
	);
}

/** A mark has one position: a name that stands twice is a fault of the file. */
function sameNames(table: PointTable): string[] {
	return duplicateNames(table.rows).map(({ name, rows }) => `${name} stands in rows ${rows.join(' and ')}; a mark has one position.`);
}
