import { Link } from 'react-router-dom';
import type { HoldPointDetail, PourDetail } from '#shared/pour/contract.ts';
import { holdPointName, holdPointStateWords } from '#src/features/pour/pour-words.ts';
import { moment } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { useSite } from '#src/lib/session.ts';

interface PointCardProps {
	siteId: string;
	pour: PourDetail;
	point: HoldPointDetail;
}

/** A hold point: where it is, who did what, its list, its conditions, its record. */
export function PointCard({ siteId, point }: PointCardProps) {
	const { timeZone } = useSite();
	const now = useNow();
	const when = (at: Date | null) => (at === null ? '' : `, ${moment(at, timeZone, now)}`);
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
				{point.list.map(({ question, answer }) => (
					<li key={question}>
						{question} <b>{answer ?? 'not answered'}</b>
					</li>
				))}
				{point.conditions.map((condition) => (
					<li key={condition.conditionId} className="border-l-[3px] border-l-rule pl-3">
						On condition: {condition.text} ({condition.owner}
						{when(condition.dueAt)}).{' '}
						{condition.isMet ? `Met: ${condition.metWords}, ${condition.metBy}` : `To be shown by ${condition.proof}`}
					</li>
				))}
			</ul>
			{point.recordId && (
				<Link
					to={`/sites/${siteId}/records/${point.recordId}`}
					className="mt-2 inline-flex min-h-11 items-center text-action underline underline-offset-3"
				>
					The record
				</Link>
			)}
		</section>
	);
}
