import type { FlagAct, FlagLife } from '#shared/flag/flag-life.ts';
import { flagName } from '#shared/flag/flag-name.ts';
import type { WorstDeviation } from '#shared/flag/flag-schema.ts';
import { answerWords, decisionWords } from '#shared/flag/said-words.ts';
import type { NoticeKind, NoticeRod } from '#shared/mail/notice.ts';
import type { Role } from '#shared/permissions.ts';
import type { Transaction } from '../../db/database.ts';
import { peopleWith } from '../../platform/membership.ts';
import type { Notice } from '../../platform/notices.ts';
import type { Member } from '../../platform/platform.ts';
import type { FlagRow } from './flag-rows.ts';

/** What a person does to a flag; the rest is the server's. */
export type PersonsAct = Exclude<FlagAct, { kind: 'measured-again' | 'lapse' }>;

interface Told {
	kind: NoticeKind;
	/** Contractors are those of the flag's company. */
	roles: readonly Role[];
	/** What was done, after "Ida Roen" and before the flag's name. */
	verb: string;
	said: string;
}

/** Whom a person's act concerns, and what is said to them: one notice a flag and person, with the flag's rod. */
export async function noticesOfAct(
	tx: Transaction,
	member: Member,
	act: PersonsAct,
	changed: readonly { row: FlagRow; after: FlagLife }[],
	now: Date,
): Promise<Notice[]> {
	const people = reader(tx, member.siteId, now);
	const notices: Notice[] = [];
	for (const { row, after } of changed)
		for (const { kind, roles, verb, said } of toldOf(act, after)) {
			const sentence = `${member.name} ${verb} ${flagName(row)}${said === '' ? '' : `: ${said}`}.`;
			notices.push({ ...about(row), kind, sentence, userIds: await people(roles, row.companyId) });
		}
	return notices;
}

/** A comment is told to the project engineers and to the flag's company; of one that is being measured again to the site engineers too. */
export async function noticesOfComment(tx: Transaction, member: Member, row: FlagRow, text: string, now: Date): Promise<Notice[]> {
	const roles: readonly Role[] =
		row.isWith === 'engineers' ? ['project-engineer', 'contractor', 'site-engineer'] : ['project-engineer', 'contractor'];
	const userIds = await reader(tx, member.siteId, now)(roles, row.companyId);
	return [{ ...about(row), kind: 'flag-comment', sentence: `${member.name} says to ${flagName(row)}: ${ended(text)}`, userIds }];
}

/** A flag that a later check has opened again is told to whoever has it now. */
export async function noticesOfReopening(
	tx: Transaction,
	siteId: string,
	reopened: readonly { row: FlagRow; after: FlagLife; worst: WorstDeviation | null }[],
	now: Date,
): Promise<Notice[]> {
	const people = reader(tx, siteId, now);
	const notices: Notice[] = [];
	for (const { row, after, worst } of reopened) {
		const roles: readonly Role[] =
			after.isWith === 'contractor' ? ['contractor', 'project-engineer'] : ['site-engineer', 'project-engineer'];
		const sentence = `${capital(flagName(row))} is open again: a later survey found it off.`;
		notices.push({ ...about({ ...row, worst }), kind: 'flag-reopened', sentence, userIds: await people(roles, row.companyId) });
	}
	return notices;
}

/** Who holds a role, asked once for each company. */
function reader(tx: Transaction, siteId: string, now: Date) {
	const known = new Map<string, Promise<string[]>>();
	return (roles: readonly Role[], companyId: string | null): Promise<string[]> => {
		// A flag of no company is no contractor's.
		const asked = companyId === null ? roles.filter((role) => role !== 'contractor') : roles;
		const key = `${asked.join()} ${companyId}`;
		const found = known.get(key) ?? peopleWith(tx, { siteId, roles: asked, now, ...(companyId !== null && { companyId }) });
		known.set(key, found);
		return found;
	};
}

function about(row: FlagRow): Pick<Notice, 'subjectId' | 'path' | 'rod'> {
	const rod = rodOf(row.worst);
	return { subjectId: row.id, path: `/sites/${row.siteId}/flags/${row.id}`, ...(rod && { rod }) };
}

function rodOf(worst: WorstDeviation | null): NoticeRod | null {
	if (worst === null || worst.limitsMm === null) return null;
	const { limitsMm, deviationMm, expandedUncertaintyMm, verdict } = worst;
	return { limitsMm, deviationMm, expandedUncertaintyMm, verdict };
}

function toldOf(act: PersonsAct, after: FlagLife): Told[] {
	switch (act.kind) {
		case 'answer':
			return [{ kind: 'flag-answered', roles: ['project-engineer'], verb: 'answers', said: lower(answerWords(act.answer).words) }];
		case 'ask-time':
			return [
				{
					kind: 'flag-time-wished',
					roles: ['project-engineer'],
					verb: 'asks for more time on',
					said: `until ${dayOf(new Date(act.until))}`,
				},
			];
		case 'grant-time': {
			const until = after.answerBy === null ? '' : `until ${dayOf(new Date(after.answerBy))}`;
			return [{ kind: 'flag-time-granted', roles: ['contractor'], verb: 'grants more time on', said: until }];
		}
		case 'put-right':
			return [
				{
					kind: 'flag-put-right',
					roles: ['site-engineer', 'project-engineer'],
					verb: 'has put right',
					said: 'it is ready to be measured',
				},
			];
		case 'decide': {
			const said = lower(decisionWords(act.decision, after.isDecidedWithoutAnswer).words);
			const roles: readonly Role[] = act.decision.kind === 'survey-again' ? ['contractor', 'site-engineer'] : ['contractor'];
			const told: Told[] = [{ kind: 'flag-decided', roles, verb: 'decides', said }];
			if (after.isConsentAwaited)
				told.push({ kind: 'flag-decided', roles: ['owners-representative'], verb: 'asks for your consent on', said });
			return told;
		}
		case 'consent': {
			const verb = act.isGiven ? 'consents to the concession on' : 'does not consent to the concession on';
			return [{ kind: 'flag-decided', roles: ['project-engineer', 'contractor'], verb, said: '' }];
		}
	}
}

const dayOf = (at: Date): string => at.toISOString().slice(0, 10);
const lower = (words: string): string => words.charAt(0).toLowerCase() + words.slice(1);
const capital = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);
const ended = (text: string): string => (/[.!?]$/.test(text) ? text : `${text}.`);
