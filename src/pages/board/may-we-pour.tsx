import { useSuspenseQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { FlagSummary } from '#shared/flag/contract.ts';
import { flagTitle } from '#shared/flag/flag-name.ts';
import type { PourBoardRow } from '#shared/pour/contract.ts';
import { deadlineWords, offWords } from '#src/features/flag/flag-words.ts';
import { pourAnswer } from '#src/features/pour/pour-words.ts';
import { api } from '#src/lib/api.ts';
import { day, isoMoment, moment } from '#src/lib/format.ts';
import { useSite } from '#src/lib/session.ts';
import { Glyph } from '#src/ui/glyph.tsx';
import { rowReason } from './row-reason.ts';

interface MayWePourProps {
	siteId: string;
	rows: readonly PourBoardRow[];
	now: Date;
}

/** A contractor's first page on a phone: one word per pour, why, when; then its flags by deadline. */
export function MayWePour({ siteId, rows, now }: MayWePourProps) {
	const { timeZone, name } = useSite();
	const { data: flags } = useSuspenseQuery(api.flag.list.queryOptions({ input: { siteId } }));
	const open = flags
		.filter(({ state, isWith }) => isWith === 'contractor' && state !== 'closed' && state !== 'lapsed')
		.toSorted(byDeadline);
	const companies = [...new Set(rows.map(({ companyName }) => companyName))];
	return (
		<>
			<h1 className="m-0 text-h1-phone font-strong tracking-[-0.015em]">May we pour?</h1>
			<p className="m-0 mb-3 text-second">{[name, ...companies, `as of ${isoMoment(now, timeZone).slice(-5)}`].join(' · ')}</p>
			{rows.length === 0 && <p className="m-0 border-y border-rule py-4 text-second">No pour of yours is planned.</p>}
			<ul className="m-0 flex list-none flex-col gap-3.5 p-0">
				{rows.map((row) => (
					<li key={row.pourId}>
						<PourAnswer siteId={siteId} row={row} timeZone={timeZone} now={now} />
					</li>
				))}
			</ul>
			<h2 className="m-0 mt-6 mb-1 text-h2 font-strong">Flags, by deadline</h2>
			{open.length === 0 && <p className="m-0 text-second">None waits for you.</p>}
			<ul className="m-0 list-none p-0">
				{open.map((flag) => (
					<li key={flag.flagId} className="border-b border-rule">
						<Link
							to={`/sites/${siteId}/flags/${flag.flagId}`}
							className="flex min-h-14 flex-col justify-center py-1.5 text-ink no-underline active:bg-hair"
						>
							<b>
								{flagTitle(flag)}, {offWords(flag)}
							</b>
							<span className="text-second">{deadlineWords(flag, timeZone, now)}</span>
						</Link>
					</li>
				))}
			</ul>
		</>
	);
}

function PourAnswer({ siteId, row, timeZone, now }: { siteId: string; row: PourBoardRow; timeZone: string; now: Date }) {
	const answer = pourAnswer(row);
	return (
		<Link
			to={`/sites/${siteId}/pours/${row.pourId}`}
			className={`sheet block px-4 py-3 text-ink no-underline ${answer === 'Hold' ? 'border-2 border-ink' : ''}`}
		>
			<span className="flex flex-wrap items-baseline justify-between gap-x-3">
				<b>
					Pour {row.number}, {row.name}
				</b>
				<span className="text-second">{row.plannedAt === null ? 'no hour yet' : shortHour(row.plannedAt, timeZone, now)}</span>
			</span>
			<span className="my-1 flex items-center gap-3 text-[30px] leading-tight font-strong tracking-[-0.01em]">
				<AnswerSign answer={answer} />
				{answer}
			</span>
			<span className="block text-second">{whyOf(row, timeZone, now)}</span>
		</Link>
	);
}

/** A ring, two bars, a dash, a filled form: told apart without colour. */
function AnswerSign({ answer }: { answer: ReturnType<typeof pourAnswer> }) {
	if (answer === 'Released') return <Glyph kind="within" sizePx={26} />;
	if (answer === 'Not released') return <Glyph kind="none" sizePx={26} />;
	return (
		<svg width="26" height="26" viewBox="0 0 26 26" aria-hidden="true" className="shrink-0">
			{answer === 'Hold' ? (
				<path d="M2 6h22v5H2zM2 15h22v5H2z" className="glyph-proud" />
			) : (
				<path d="M3 6h20v14H3z" className="fill-second stroke-ink" />
			)}
		</svg>
	);
}

function whyOf(row: PourBoardRow, timeZone: string, now: Date): string {
	const { hold, conditions, signedBy, signedAt } = row;
	if (hold !== null) {
		const seen = hold.seenByYouAt === null ? 'Say that you saw it.' : `Seen by you ${isoMoment(hold.seenByYouAt, timeZone).slice(-5)}.`;
		return `${hold.reasons[0] ?? ''} ${seen}`;
	}
	if (pourAnswer(row) === 'Released') {
		const said = [signedBy, signedAt === null ? null : moment(signedAt, timeZone, now)].filter((one) => one !== null).join(', ');
		const on = conditions.map(({ text, owner, dueAt }) => `${text} (${owner}${dueAt === null ? '' : `, ${moment(dueAt, timeZone, now)}`})`);
		return on.length === 0 ? `${said}.` : `${said}. On condition: ${on.join('; ')}`;
	}
	return `${rowReason(row, timeZone, now)}.`;
}

/** "Thu 07:00" within six days, "Thu 11 Dec 07:00" after. */
function shortHour(at: Date, timeZone: string, now: Date): string {
	const isNear = Math.abs(at.getTime() - now.getTime()) < 6 * 86_400_000;
	return isNear ? `${day(at, timeZone).slice(0, 3)} ${isoMoment(at, timeZone).slice(-5)}` : moment(at, timeZone, now);
}

function byDeadline(a: FlagSummary, b: FlagSummary): number {
	return (a.answerBy?.getTime() ?? Number.POSITIVE_INFINITY) - (b.answerBy?.getTime() ?? Number.POSITIVE_INFINITY) || a.number - b.number;
}
