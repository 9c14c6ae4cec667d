import type { FlagSummary } from '../flag/contract.ts';
import type { Role } from '../permissions.ts';
import type { BoardFacts, Task } from './board-facts.ts';
import { counted } from './next-acts.ts';

const workKinds = new Set(['rework', 'repair', 'reject-and-replace']);

/** The nearest of these times that is still to come. */
export function earliest(times: readonly Date[], after: Date): Date | null {
	const coming = times.filter((time) => time > after).sort((a, b) => a.getTime() - b.getTime());
	return coming[0] ?? null;
}

/** "C/3, A/3 and 2 more". */
/** By what people call the elements, not by their marks for the field. */
function titlesOf(flags: readonly FlagSummary[]): string {
	const titles = [...new Set(flags.map(({ title }) => title))];
	return titles.length <= 3 ? titles.join('; ') : `${titles.slice(0, 2).join('; ')} and ${titles.length - 2} more`;
}

/** What is open of the flags, by whose turn it is. Pure. */
export function flagTasks({ flags, pours, now }: BoardFacts): Task[] {
	const tasks: Task[] = [];
	const pourOf = (some: readonly FlagSummary[]) => {
		const ids = new Set(some.flatMap((flag) => flag.pours.map(({ pourId }) => pourId)));
		return earliest(
			pours.flatMap(({ pourId, plannedAt }) => (ids.has(pourId) && plannedAt !== null ? [plannedAt] : [])),
			now,
		);
	};
	const add = (
		some: readonly FlagSummary[],
		role: Role,
		told: { verb: string; what: string; why?: string; path?: string; by?: Date | null },
	) => {
		const [first] = some;
		if (first === undefined) return;
		const company =
			role === 'contractor' && first.companyId !== null ? { id: first.companyId, name: first.companyName ?? 'The contractor' } : undefined;
		const by = told.by === undefined ? pourOf(some) : told.by;
		const isBefore = told.by === undefined && by !== null;
		const path = told.path ?? (some.length === 1 ? `flags/${first.flagId}` : 'flags');
		const act = { verb: told.verb, path, why: told.why ?? `${titlesOf(some)}.`, by, isBefore };
		const since = some.map(({ changedAt }) => changedAt).sort((a, b) => a.getTime() - b.getTime())[0] ?? null;
		tasks.push({ role, ...(company && { company }), act, what: told.what, since });
	};
	const open = flags.filter(({ state }) => state === 'open');
	const isRun = ({ answerBy }: FlagSummary) => answerBy !== null && answerBy <= now;
	const withContractor = open.filter(({ isWith, companyId }) => isWith === 'contractor' && companyId !== null);
	for (const companyId of new Set(withContractor.map((flag) => flag.companyId))) {
		const own = withContractor.filter((flag) => flag.companyId === companyId);
		const by = own.flatMap(({ answerBy }) => answerBy ?? []).sort((a, b) => a.getTime() - b.getTime())[0] ?? null;
		add(own, 'contractor', { verb: `Answer ${counted(own.length, 'flag')}`, what: `answer ${counted(own.length, 'flag')}`, by });
	}
	const decided = flags.filter(({ state, companyId }) => state === 'decided' && companyId !== null);
	for (const companyId of new Set(decided.map((flag) => flag.companyId))) {
		const works = decided.filter((flag) => flag.companyId === companyId && workKinds.has(flag.decision?.kind ?? ''));
		const times = works.flatMap(({ decision }) => (decision !== null && 'by' in decision && decision.by !== null ? [decision.by] : []));
		const by = times.sort((a, b) => a.getTime() - b.getTime())[0];
		const words = counted(works.length, 'place');
		add(works, 'contractor', { verb: `Put right ${words}`, what: `put right ${words}`, ...(by && { by }) });
	}
	const answered = flags.filter(({ state, isConsentAwaited }) => state === 'answered' && !isConsentAwaited);
	add(answered, 'project-engineer', {
		verb: `Decide ${counted(answered.length, 'answer')}`,
		what: `decide ${counted(answered.length, 'answer')}`,
		why: answered
			.slice(0, 3)
			.map(({ title, answer }) => `${title}: ${answerWord(answer)}.`)
			.join(' '),
	});
	const late = withContractor.filter(isRun);
	add(late, 'project-engineer', {
		verb: `Decide ${counted(late.length, 'flag')} unanswered`,
		what: `decide ${counted(late.length, 'flag')} that nobody answered in time`,
	});
	const asking = open.filter(({ timeAsked }) => timeAsked !== null);
	add(asking, 'project-engineer', { verb: 'Say whether there is more time', what: 'say whether there is more time' });
	const consent = flags.filter(({ isConsentAwaited }) => isConsentAwaited);
	add(consent, 'owners-representative', {
		verb: `Say of ${counted(consent.length, 'concession')}`,
		what: `consent, or not, to ${counted(consent.length, 'concession')}`,
	});
	const close = open.filter(({ isWith }) => isWith === 'engineers');
	add(close, 'project-engineer', {
		verb: `Decide ${counted(close.length, 'open question')}`,
		what: `decide ${counted(close.length, 'flag')} with the engineers`,
		why: `Too close to call, undecided or in nobody’s pour: ${titlesOf(close)}.`,
	});
	const toShoot = flags.filter(
		({ state, decision }) => state === 'put-right' || (state === 'decided' && decision?.kind === 'survey-again'),
	);
	add(toShoot, 'site-engineer', {
		verb: `Measure ${counted(toShoot.length, 'place')} again`,
		what: `measure ${counted(toShoot.length, 'place')} again`,
		path: 'shoot-list',
	});
	return tasks;
}

function answerWord(answer: FlagSummary['answer']): string {
	switch (answer?.kind) {
		case 'put-right':
			return 'to be put right';
		case 'concession':
			return 'a concession asked';
		case 'contest':
			return 'contested';
		case undefined:
			return 'answered';
	}
}
