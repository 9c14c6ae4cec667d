import { useQuery, useSuspenseQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { HoldPointDetail, PourDetail, ShownHoldPoint } from '#shared/pour/contract.ts';
import { whatChanged } from '#shared/pour/what-changed.ts';
import { sealedRecord } from '#shared/record/sealed-record.ts';
import { pointInHand } from '#src/features/pour/pour-words.ts';
import { SignForm } from '#src/features/pour/sign-form.tsx';
import { ShownDigest } from '#src/features/record/shown-digest.tsx';
import { ShownPourView } from '#src/features/record/shown-pour.tsx';
import { api } from '#src/lib/api.ts';
import { counted } from '#src/lib/format.ts';
import { Button, ButtonLink } from '#src/ui/button.tsx';
import { useProof } from './use-proof.tsx';

interface SignDialogBodyProps {
	siteId: string;
	pour: PourDetail;
	point: HoldPointDetail;
	shown: ShownHoldPoint;
	at: (iso: string) => string;
	timeZone: string;
	onClose: () => void;
}

/** What is signed, whole, above the place where one signs. The hash is that of what stood here when the dialog was opened. */
export function SignDialogBody({ siteId, pour, point, shown, at, timeZone, onClose }: SignDialogBodyProps) {
	const [kept] = useState(shown);
	const [signed, setSigned] = useState<{ sequence: number | null } | null>(null);
	const proof = useProof(timeZone);
	const changed = useChanged(siteId, point, kept);
	if (signed !== null) return <Signed siteId={siteId} pourId={pour.pourId} sequence={signed.sequence} onClose={onClose} />;
	return (
		<div className="flex flex-col gap-5">
			<ShownDigest shown={kept.shown} changed={changed} />
			<ShownPourView shown={kept.shown} at={at} />
			<SignForm
				siteId={siteId}
				pourId={pour.pourId}
				point={point.kind}
				shownSha256={kept.shownSha256}
				isReady={kept.shown.isReady}
				statement={`Pour ${pour.number}, ${pour.name}, is released ${point.kind === 'before-pour' ? 'for concrete' : 'as cast'} as shown.`}
				timeZone={timeZone}
				proof={proof.shown}
				whyNotSign={proof.whyNot}
				onSigned={(sequence) => setSigned({ sequence })}
			/>
			{proof.dialog}
		</div>
	);
}

/** Against the record of this hold point that was signed last. */
function useChanged(siteId: string, { recordId }: HoldPointDetail, { shown }: ShownHoldPoint): readonly string[] | null {
	const { data } = useQuery(api.record.get.queryOptions({ input: { siteId, recordId: recordId ?? '' }, enabled: recordId !== null }));
	if (data === undefined) return null;
	const { body } = sealedRecord.parse(JSON.parse(data.text));
	return body.act === 'withdrawn' ? [`The release was withdrawn: ${body.statement}`] : whatChanged(body.shown, shown);
}

/** After the signature: the next pour that waits, so that several are signed one after the other, each shown whole. */
function Signed({ siteId, pourId, sequence, onClose }: { siteId: string; pourId: string; sequence: number | null; onClose: () => void }) {
	const { data: pours } = useSuspenseQuery(api.pour.list.queryOptions({ input: { siteId } }));
	const waiting = pours.filter(
		(one) => one.pourId !== pourId && one[pointInHand(one) === 'before-pour' ? 'before' : 'after'] === 'submitted',
	);
	const [next] = waiting;
	return (
		<div className="flex flex-col gap-4">
			<p role="status" className="m-0 text-lead font-strong">
				{sequence === null ? 'Said. Nothing was signed.' : `Signed, as record ${sequence}. All concerned are told.`}
			</p>
			<p className="m-0">
				{next === undefined
					? 'No other pour waits for you.'
					: `${counted(waiting.length, 'other pour')} ${waiting.length === 1 ? 'waits' : 'wait'} for you.`}
			</p>
			<div className="flex flex-wrap gap-2.5">
				{next !== undefined && (
					<ButtonLink to={`/sites/${siteId}/pours/${next.pourId}?sign=now`} weight="act">
						Next: pour {next.number}, {next.name}
					</ButtonLink>
				)}
				<Button onClick={onClose}>Close</Button>
			</div>
		</div>
	);
}
