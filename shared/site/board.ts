import { mayWith, type Role } from '../permissions.ts';
import type { PourSummary } from '../pour/contract.ts';
import type { BoardFacts, Task } from './board-facts.ts';
import { earliest, flagTasks } from './board-flag-tasks.ts';
import { type Board, type BoardAct, mostActs, mostWaiting } from './board-schema.ts';
import { nextActs } from './next-acts.ts';

/** What waits for this person, at most five, the most pressing first; and what waits on others. Pure. */
export function boardOf(facts: BoardFacts): Board {
	const tasks = [...holdTasks(facts), ...flagTasks(facts), ...pourTasks(facts), ...engineerTasks(facts)];
	const isMine = ({ role, company, notFor }: Task) =>
		facts.roles.includes(role) && notFor !== facts.userId && (company === undefined || facts.companyIds.includes(company.id));
	const nextPour = earliest(
		facts.pours.flatMap(({ plannedAt, state }) => (state === 'planned' && plannedAt !== null ? [plannedAt] : [])),
		facts.now,
	);
	const beginnings = nextActs({ ...facts, pourCount: facts.pours.length }).map(
		({ isBeforePour, ...act }): BoardAct => ({ ...act, by: isBeforePour ? nextPour : null, isBefore: isBeforePour && nextPour !== null }),
	);
	const mine = tasks.filter(isMine).map(({ act }) => act);
	return {
		next: [...seeHolds(facts), ...byDeadline(mine), ...beginnings].slice(0, mostActs),
		waiting: [
			...tasks
				.filter((task) => !isMine(task))
				.map((task) => ({ who: whoOf(task, facts), what: task.what, since: task.since ?? null, by: task.act.by })),
			...(facts.invitations ?? []).map(({ email, sentAt }) => ({ who: email, what: 'accept the invitation', since: sentAt, by: null })),
		].slice(0, mostWaiting),
	};
}

/** Those with a deadline first, the nearest before; the rest as they came. */
function byDeadline(acts: readonly BoardAct[]): BoardAct[] {
	const timeOf = ({ by }: BoardAct) => by?.getTime() ?? Number.POSITIVE_INFINITY;
	return acts
		.map((act, order) => ({ act, order }))
		.sort((a, b) => (timeOf(a.act) === timeOf(b.act) ? a.order - b.order : timeOf(a.act) < timeOf(b.act) ? -1 : 1))
		.map(({ act }) => act);
}

const roleWords: Record<Role, string> = {
	'site-engineer': 'the site engineers',
	'project-engineer': 'the project engineers',
	contractor: 'the contractor',
	'owners-representative': 'the owner’s representatives',
	observer: 'the observers',
};

function whoOf({ role, company }: Task, { holders }: BoardFacts): string {
	if (company !== undefined) return company.name;
	const names = holders[role] ?? [];
	const [only] = names;
	if (only === undefined) return `Nobody yet (${roleWords[role].replace(/^the (.*?)s?$/, '$1')})`;
	return names.length === 1 ? only : capital(roleWords[role]);
}

const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

function seeHolds({ unseenHolds, pours }: BoardFacts): BoardAct[] {
	return unseenHolds.map(({ pourId, reasons }) => ({
		verb: `See the hold on pour ${numberOf(pours, pourId)}`,
		path: `pours/${pourId}`,
		why: `Hold: do not pour. ${reasons[0] ?? ''}`.trim(),
		by: null,
		isBefore: false,
	}));
}

const numberOf = (pours: readonly PourSummary[], pourId: string) => pours.find((pour) => pour.pourId === pourId)?.number ?? '?';

function holdTasks({ conditions, pours }: BoardFacts): Task[] {
	return conditions.flatMap(({ pourId, text, owner, dueAt }) => {
		const pour = pours.find((one) => one.pourId === pourId);
		if (pour === undefined) return [];
		const act = {
			verb: `Meet a condition of pour ${pour.number}`,
			path: `pours/${pourId}`,
			why: `${text} (${owner})`,
			by: dueAt,
			isBefore: false,
		};
		return [
			{
				role: 'contractor' as const,
				company: { id: pour.companyId, name: pour.companyName },
				act,
				what: `meet a condition of pour ${pour.number}`,
			},
		];
	});
}

function pourTasks({ pours, holdPoints }: BoardFacts): Task[] {
	return holdPoints.flatMap(({ pourId, kind, state, calledAt, submittedAt }): Task[] => {
		const pour = pours.find((one) => one.pourId === pourId);
		if (pour === undefined) return [];
		const isCast = pour.state === 'cast' || pour.state === 'cast-in-part';
		if (kind === 'before-pour' ? pour.state !== 'planned' : !isCast) return [];
		const which = kind === 'before-pour' ? `pour ${pour.number}` : `pour ${pour.number} after its concrete`;
		const by = kind === 'before-pour' ? pour.plannedAt : null;
		const actOf = (verb: string, why: string): BoardAct => ({
			verb: `${verb} ${which}`,
			path: `pours/${pourId}`,
			why,
			by,
			isBefore: by !== null,
		});
		const company = { id: pour.companyId, name: pour.companyName };
		if (state === 'open' || state === 'refused')
			return [{ role: 'contractor', company, act: actOf('Call', `${pour.name}: its hold point is not called.`), what: `call ${which}` }];
		if (state === 'called' || state === 'more-asked') {
			const why = state === 'called' ? `${pour.name}: called, to be submitted.` : `${pour.name}: more is asked before it is signed.`;
			return [{ role: 'project-engineer', act: actOf('Submit', why), what: `submit ${which}`, since: calledAt }];
		}
		if (state === 'submitted')
			return [
				{
					role: 'owners-representative',
					act: actOf('Release', `${pour.name}: submitted, to be signed.`),
					what: `release ${which}`,
					since: submittedAt,
				},
			];
		return [];
	});
}

/** What only those see who see the whole site's checks: the fits' second person, checks to publish, sheets in draft. */
function engineerTasks({ roles, uncheckedFits, checks, drafts }: BoardFacts): Task[] {
	if (!mayWith(roles, 'job.see')) return [];
	const fits = uncheckedFits.map(
		({ number, surveyId, setupId, adoptedById, adoptedAt }): Task => ({
			role: 'site-engineer',
			...(adoptedById !== null && { notFor: adoptedById }),
			act: {
				verb: `Check fit ${number}`,
				path: `surveys/${surveyId}/setups/${setupId}`,
				why: 'Adopted; a second person has not looked at it yet.',
				by: null,
				isBefore: false,
			},
			what: `check fit ${number} as the second person`,
			since: adoptedAt,
		}),
	);
	const trial = checks.find(({ state }) => state === 'trial' || state === 'published');
	const publish: Task[] =
		trial?.state !== 'trial'
			? []
			: [
					{
						role: 'site-engineer',
						act: {
							verb: `Publish check ${trial.number}`,
							path: `checks/${trial.checkId}`,
							why: 'A trial: it counts, and flags are raised, once it is published.',
							by: null,
							isBefore: false,
						},
						what: `publish check ${trial.number}`,
						since: trial.madeAt,
					},
				];
	const sheets = drafts.map(
		({ sheetId, name }): Task => ({
			role: 'project-engineer',
			act: {
				verb: `Issue sheet ${name}`,
				path: `sheets/${sheetId}`,
				why: 'A draft decides nothing before it is issued.',
				by: null,
				isBefore: false,
			},
			what: `issue sheet ${name}`,
		}),
	);
	return [...fits, ...publish, ...sheets];
}
