import { copyFile, mkdir, readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { and, eq } from 'drizzle-orm';
import type { FitKind } from '#shared/fit/fit-schema.ts';
import type { Role } from '#shared/permissions.ts';
import type { PointField, PointTableReading } from '#shared/survey/point-table-schema.ts';
import { toleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { users } from '../db/schema/account.ts';
import { uploads } from '../db/schema/file.ts';
import { jobs } from '../db/schema/job.ts';
import { models, revisions } from '../db/schema/model.ts';
import { buildings, companies, memberships, sites } from '../db/schema/site.ts';
import { setups } from '../db/schema/survey.ts';
import { sheets } from '../db/schema/tolerance.ts';
import { runCheck } from '../features/check/run-check.ts';
import { storeControl } from '../features/control/store-control.ts';
import { adoptFit } from '../features/fit/adopt-fit.ts';
import { makeFit } from '../features/fit/make-fit.ts';
import { readModel } from '../features/model/read-model.ts';
import { addPour } from '../features/pour/add-pour.ts';
import { storeSurvey } from '../features/survey/store-survey.ts';
import { issueSheet, sheetToIssue } from '../features/tolerance/issue-sheet.ts';
import { audit } from '../platform/audit.ts';
import { hashPassword } from '../platform/password.ts';
import type { Member, Platform } from '../platform/platform.ts';
import { uploadPath } from '../platform/uploads.ts';

/** The demo site: every person, firm and figure on it is invented. The same at every run, through the same commands that people use. */

const demoFolder = 'fixtures/demo';
const siteName = 'Marrowby pump house';
export const demoPassword = 'plumb-and-level';

const people: readonly { role: Role; name: string; email: string; company: string | null }[] = [
	{ role: 'site-engineer', name: 'Jo Marsh', email: 'site@marrowby.example', company: null },
	{ role: 'project-engineer', name: 'Ida Roen', email: 'project@marrowby.example', company: null },
	{ role: 'contractor', name: 'Lena Fennick', email: 'contractor@marrowby.example', company: 'Fennick Forms' },
	{ role: 'owners-representative', name: 'R. Amadi', email: 'owner@marrowby.example', company: null },
	{ role: 'observer', name: 'N. Vale', email: 'observer@marrowby.example', company: null },
	// The second person: a fit is checked by another than who adopted it.
	{ role: 'site-engineer', name: 'T. Okoro', email: 'second@marrowby.example', company: null },
];
const companyNames = ['Fennick Forms', 'Oster Steel'] as const;

/** Makes the demo site and answers the sentence to print. Null where any site is there already: nothing is touched where people work. */
export async function seedDemo(platform: Platform): Promise<string | null> {
	if ((await platform.db.select({ id: sites.id }).from(sites).limit(1)).length > 0) return null;
	const { siteId, members, companyIds } = await addPeople(platform);
	const [siteEngineer, projectEngineer] = [memberOf(members, 'site-engineer'), memberOf(members, 'project-engineer')];

	await issueDemoSheet(platform, projectEngineer);
	const modelUpload = await asUpload(platform, projectEngineer, 'pump-house.ifc');
	const { revisionId, jobId } = await readModel(platform, projectEngineer, { uploadId: modelUpload, model: { newName: 'Structure' } });
	await ended(platform, jobId);

	const controlUpload = await asUpload(platform, siteEngineer, 'control-map.csv');
	const control = await storeControl(
		platform,
		siteEngineer,
		{
			siteId,
			uploadId: controlUpload,
			name: 'Site control',
			frame: 'map',
			reading: readingOf(['name', 'easting', 'northing', 'height', 'sigmaPlan', 'sigmaHeight']),
			defaultSigmaM: null,
		},
		async () => {},
	);
	if (!control.ok) throw new Error(`The demo's control has faults: ${control.faults[0]?.message}`);

	const surveyUpload = await asUpload(platform, siteEngineer, 'survey-1.csv');
	const survey = await storeSurvey(
		platform,
		siteEngineer,
		{
			siteId,
			uploadId: surveyUpload,
			reading: readingOf(['setup', 'name', 'easting', 'northing', 'height', 'sigmaX', 'sigmaY', 'sigmaZ', 'offsetMm', 'code']),
			survey: {
				name: 'as cast, whole house',
				stage: 'as-cast',
				surveyedOn: '2026-11-26',
				observer: 'Jo Marsh',
				instrument: 'total station, 1″ (invented)',
				serial: 'demo 0417',
			},
			setups: ['S1', 'S2'].map((name) => ({
				name,
				levelling: 'levelled',
				bringsScale: true,
				pointSigmaM: null,
				commonMm: 0.5,
				instrumentHeightM: null,
			})),
		},
		async () => {},
	);
	if (!survey.ok) throw new Error(`The demo's survey has faults: ${survey.faults[0]?.message}`);
	await adoptEach(platform, siteEngineer, survey.surveyId, control.set.controlSetId, 'levelled');

	await addPours(platform, projectEngineer, revisionId, companyIds);
	const sheetId = await issuedSheetId(platform, siteId);
	const check = await runCheck(platform, siteEngineer, { revisionId, surveyId: survey.surveyId, sheetId });
	await ended(platform, check.jobId);
	return demoSentence();
}

/** Who can sign in to the demo, and with what. */
export function demoSentence(): string {
	const lines = people.map(({ role, email }) => `  ${email.padEnd(30)}${role.replace(/-/g, ' ').replace('owners', 'owner’s')}`);
	return [`The demo site is invented, and so are all people on it. Password of each: ${demoPassword}`, ...lines].join('\n');
}

async function addPeople(platform: Platform): Promise<{ siteId: string; members: Member[]; companyIds: Map<string, string> }> {
	const { newId, now } = platform;
	const siteId = newId();
	const passwordHash = await hashPassword(demoPassword);
	const companyIds = new Map(companyNames.map((name) => [name as string, newId()]));
	const members: Member[] = [];
	await platform.transaction(async (tx) => {
		await tx.insert(sites).values({
			id: siteId,
			name: siteName,
			timeZone: 'Europe/London',
			isInvented: true,
			isFitCheckedBySecond: true,
			columnOrder: null,
			createdAt: now(),
		});
		await tx.insert(buildings).values({ id: newId(), siteId, name: 'Pump house' });
		await tx.insert(companies).values([...companyIds].map(([name, id]) => ({ id, siteId, name })));
		for (const { role, name, email, company } of people) {
			const userId = newId();
			const companyId = company === null ? null : (companyIds.get(company) ?? null);
			await tx.insert(users).values({ id: userId, email, name, passwordHash, createdAt: now() });
			// The one of each company leads its people.
			const isLead = role === 'contractor';
			await tx.insert(memberships).values({ id: newId(), siteId, userId, role, companyId, isLead, fromAt: now() });
			members.push({ userId, name, email, siteId, roles: [role], companyIds: companyId === null ? [] : [companyId] });
		}
		const founder = memberOf(members, 'project-engineer');
		await audit(tx, founder, { kind: 'site-founded', subjectId: siteId, data: { name: siteName, isInvented: true } });
		for (const { userId, roles } of members) {
			await audit(tx, founder, { kind: 'member-added', subjectId: userId, data: { roles } });
		}
	});
	return { siteId, members, companyIds };
}

function memberOf(members: readonly Member[], role: Role): Member {
	const member = members.find(({ roles }) => roles.includes(role));
	if (!member) throw new Error(`The demo has no ${role}.`);
	return member;
}

async function issueDemoSheet(platform: Platform, member: Member): Promise<void> {
	const text = await readFile(join(demoFolder, 'tolerances.json'), 'utf8');
	const toIssue = await sheetToIssue(platform.newId(), toleranceSheet.parse(JSON.parse(text)));
	await platform.transaction((tx) => issueSheet(tx, member, toIssue, 'Invented limits for the demo site.', platform.now()));
}

/** A file of the demo as if this member had just sent it. */
async function asUpload(platform: Platform, member: Member, fileName: string): Promise<string> {
	const source = join(demoFolder, fileName);
	const uploadId = platform.newId().replaceAll('-', '');
	await mkdir(platform.uploadFolder, { recursive: true });
	await copyFile(source, uploadPath(platform.uploadFolder, uploadId));
	const { size } = await stat(source);
	const at = platform.now();
	await platform.db
		.insert(uploads)
		.values({ id: uploadId, siteId: member.siteId, userId: member.userId, fileName, bytes: size, begunAt: at, finishedAt: at });
	return uploadId;
}

/** Columns in the file's order, metres, decimal point, a header. */
function readingOf(fields: readonly PointField[]): PointTableReading {
	const columns = Object.fromEntries(fields.map((field, index) => [field, index]));
	return { encoding: 'utf-8', delimiter: ',', decimalMark: '.', hasHeader: true, unit: 'm', columns };
}

async function adoptEach(platform: Platform, member: Member, surveyId: string, controlSetId: string, kind: FitKind): Promise<void> {
	const { siteId } = member;
	const standing = await platform.db
		.select({ id: setups.id, name: setups.name })
		.from(setups)
		.where(and(eq(setups.siteId, siteId), eq(setups.surveyId, surveyId)));
	for (const setup of standing) {
		const made = await makeFit(platform, member, { siteId, setupId: setup.id, controlSetId, kind, knownScale: null, shelves: [] });
		if (!made.ok) throw new Error(`The demo's set-up ${setup.name} has no fit: ${made.refusal.message}`);
		await adoptFit(platform, member, { fitId: made.fit.fitId, reason: 'Residuals agree with the instrument’s σ (demo).' });
	}
}

async function addPours(platform: Platform, member: Member, revisionId: string, companyIds: ReadonlyMap<string, string>): Promise<void> {
	const [revision] = await platform.db.select({ modelId: revisions.modelId }).from(revisions).where(eq(revisions.id, revisionId));
	const [model] = revision ? await platform.db.select({ id: models.id }).from(models).where(eq(models.id, revision.modelId)) : [];
	const [forms, steel] = companyNames.map((name) => companyIds.get(name));
	if (!model || !forms || !steel) throw new Error('The demo has no model to make pours of.');
	const dayMs = 24 * 3_600_000;
	const inDays = (days: number, hour: number) => {
		const day = new Date(platform.now().getTime() + days * dayMs);
		return new Date(Date.UTC(day.getUTCFullYear(), day.getUTCMonth(), day.getUTCDate(), hour));
	};
	const pours = [
		{
			number: '7',
			name: 'ground columns',
			companyId: forms,
			plannedAt: inDays(2, 7),
			elements: [{ storey: 'Ground', class: 'IfcColumn' }],
		},
		{
			number: '8',
			name: 'plinths and bolts',
			companyId: forms,
			plannedAt: inDays(2, 13),
			elements: [{ storey: 'Ground', class: 'IfcMechanicalFastener' }],
		},
		{ number: '9', name: 'roof slab', companyId: steel, plannedAt: inDays(5, 7), elements: [{ storey: 'Roof', class: 'IfcSlab' }] },
	];
	for (const pour of pours) await addPour(platform, member, { ...pour, modelId: model.id });
}

async function issuedSheetId(platform: Platform, siteId: string): Promise<string> {
	const [sheet] = await platform.db
		.select({ id: sheets.id })
		.from(sheets)
		.where(and(eq(sheets.siteId, siteId), eq(sheets.state, 'issued')));
	if (!sheet) throw new Error('The demo has no issued sheet.');
	return sheet.id;
}

/** Waits for long work to end well. */
async function ended(platform: Platform, jobId: string): Promise<void> {
	for (let tries = 0; tries < 600; tries++) {
		const [job] = await platform.db.select().from(jobs).where(eq(jobs.id, jobId));
		if (job?.state === 'done') return;
		if (job?.state === 'failed' || job?.state === 'cancelled') throw new Error(`The demo's ${job.kind} ended: ${job.reason}`);
		await wait(200);
	}
	throw new Error('The demo was not made within two minutes.');
}
