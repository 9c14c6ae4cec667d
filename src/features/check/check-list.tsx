import { Link } from 'react-router-dom';
import type { CheckHead } from '#shared/check/contract.ts';
import { calendarDay, count, isoMoment } from '#src/lib/format.ts';
import { Glyph } from '#src/ui/glyph.tsx';
import type { GlyphKind } from '#src/ui/glyph-kind.ts';
import { sheetWords } from './sheet-words.ts';

interface CheckListProps {
	siteId: string;
	/** Newest first. */
	checks: readonly CheckHead[];
	timeZone: string;
}

/** What is worth a glyph in a summary, the worst first. */
const parts: readonly { verdict: keyof CheckHead['summary']; word: string; glyph: GlyphKind }[] = [
	{ verdict: 'outside', word: 'outside', glyph: 'proud' },
	{ verdict: 'too-close-to-call', word: 'too close to call', glyph: 'close' },
	{ verdict: 'undecided', word: 'undecided', glyph: 'close' },
	{ verdict: 'not-measured', word: 'not measured', glyph: 'none' },
	{ verdict: 'no-tolerance', word: 'no tolerance', glyph: 'none' },
	{ verdict: 'within', word: 'within', glyph: 'within' },
];

const stateWords: Record<CheckHead['state'], string> = {
	computing: 'being computed',
	trial: 'trial',
	published: 'published',
	withdrawn: 'withdrawn',
	failed: 'no result',
};

/** The site's checks, a row each: what came out, what it stands on, whether that is the newest. */
export function CheckList({ siteId, checks, timeZone }: CheckListProps) {
	return (
		<ul className="sheet m-0 list-none p-0">
			{checks.map((check) => (
				<li key={check.checkId} className="border-b border-b-hair last:border-b-0">
					<Link
						to={`/sites/${siteId}/checks/${check.checkId}`}
						className="grid min-h-14 gap-x-6 gap-y-1 px-4 py-3 text-ink no-underline hover:bg-ground tablet:grid-cols-[7rem_1fr] cabin:grid-cols-[7rem_1fr_19rem]"
					>
						<span>
							<b>Check {check.number}</b>
							<span className="block text-small text-second">{stateWords[check.state]}</span>
						</span>
						<span className="min-w-0">
							<Summary check={check} />
						</span>
						<span className="text-small text-second tablet:col-start-2 cabin:col-start-auto">
							<span className="block">
								{check.revision.modelName} rev {check.revision.number}
								{!check.revision.isNewest && <b className="text-ink">, not the newest</b>} · survey {check.survey.number},{' '}
								{calendarDay(check.survey.surveyedOn, check.madeAt)} · {sheetWords(check.sheet.name)}
							</span>
							<span className="block">
								by {check.madeBy}, {isoMoment(check.madeAt, timeZone)}
							</span>
						</span>
					</Link>
				</li>
			))}
		</ul>
	);
}

function Summary({ check }: { check: CheckHead }) {
	if (check.state === 'failed') return <span>{check.reason ?? 'It ended without a result.'}</span>;
	if (check.state === 'computing') return <span className="text-second">Its figures come when all of them stand.</span>;
	const there = parts.filter(({ verdict }) => (check.summary[verdict] ?? 0) > 0);
	if (there.length === 0) return <span className="text-second">No checkpoints.</span>;
	return (
		<span className="flex flex-wrap gap-x-4 gap-y-1">
			{there.map(({ verdict, word, glyph }) => (
				<span
					key={verdict}
					className={`inline-flex items-center gap-1.5 ${verdict === 'outside' ? 'font-strong text-proud-word' : verdict === 'within' ? 'text-second' : ''}`}
				>
					<Glyph kind={glyph} />
					{count(check.summary[verdict] ?? 0)} {word}
				</span>
			))}
		</span>
	);
}
