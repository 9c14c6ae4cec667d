import { Link } from 'react-router-dom';
import type { HoldPointDetail, PourDetail } from '#shared/pour/contract.ts';
import { ConditionList } from '#src/features/pour/condition-list.tsx';
import { holdPointName, holdPointStateWords } from '#src/features/pour/pour-words.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useMay, useSite } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';

interface PointCardProps {
	siteId: string;
	pour: PourDetail;
	point: HoldPointDetail;
	/** Why its release cannot be withdrawn; absent where this person never withdraws. */
	withdraw?: string | null | undefined;
	onSetList: () => void;
	onWithdraw: () => void;
}

/** A hold point: where it is, who did what, its list, its conditions, its record. */
export function PointCard({ siteId, pour, point, withdraw, onSetList, onWithdraw }: PointCardProps) {
	const { timeZone } = useSite();
	const now = useNow();
	const maySetList = useMay('pour.write');
	const mayMeet = useMay('pour.meet');
	const when = (at: Date | null) => (at === null ? '' : `, ${moment(at, timeZone, now)}`);
	const isListFixed = !['open', 'more-asked', 'refused'].includes(point.state);
	return (
		<section className="sheet px-4.5 py-4">
			<h2 className="m-0 text-h2 font-strong">
				{holdPointName(point.kind)}: {holdPointStateWords(point.state)}
			</h2>
			<ul className="m-0 mt-2 flex list-none flex-col gap-1 p-0">
				{point.readyFrom && <li>Ready from {moment(point.readyFrom, timeZone, now)}</li>}
				{point.calledBy && (
					<li className="text-second">
						Called by {point.calledBy}
						{when(point.calledAt)}
					</li>
				)}
				{point.submittedBy && (
					<li className="text-second">
						Submitted by {point.submittedBy}
						{when(point.submittedAt)}
					</li>
				)}
				{point.statement && (
					<li>
						“{point.statement}” {point.signedBy}
						{when(point.signedAt)}
					</li>
				)}
			</ul>
			<h3 className="m-0 mt-3 text-lead font-strong">Hold-point list</h3>
			{point.list.length === 0 && <p className="m-0 text-second">It has no questions.</p>}
			<ul className="m-0 flex list-none flex-col gap-1 p-0">
				{point.list.map(({ question, answer }) => (
					<li key={question}>
						{question} {answer === null ? <span className="text-second">not answered</span> : <b>{answer}</b>}
					</li>
				))}
			</ul>
			<ConditionList siteId={siteId} pourId={pour.pourId} conditions={point.conditions} mayMeet={mayMeet} timeZone={timeZone} now={now} />
			<div className="mt-3 flex flex-wrap items-center gap-2.5">
				{maySetList && (
					<Button whyNot={isListFixed ? 'It is called, so its list stays as it is answered.' : null} onClick={onSetList}>
						Set the list
					</Button>
				)}
				{withdraw !== undefined && (
					<Button whyNot={withdraw} onClick={onWithdraw}>
						Withdraw the release
					</Button>
				)}
				{point.recordId && (
					<Link
						to={`/sites/${siteId}/records/${point.recordId}`}
						className="inline-flex min-h-11 items-center text-action underline underline-offset-3 pointer-coarse:min-h-12"
					>
						The record
					</Link>
				)}
			</div>
		</section>
	);
}
