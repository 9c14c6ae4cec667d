import { randomUUID } from 'node:crypto';
import type { WorstDeviation } from '#shared/flag/flag-schema.ts';
import { insertRows } from '../../server/db/insert-rows.ts';
import { checks } from '../../server/db/schema/check.ts';
import { files } from '../../server/db/schema/file.ts';
import { flags } from '../../server/db/schema/flag.ts';
import { models, revisions } from '../../server/db/schema/model.ts';
import { surveys } from '../../server/db/schema/survey.ts';
import type { Member } from '../../server/platform/platform.ts';
import type { TestServer } from '../routes/harness.ts';
import { issuedSheet } from './as-built.ts';

type FlagRow = typeof flags.$inferInsert;

const sha256 = 'f1'.repeat(32);
const worst: WorstDeviation = {
	label: 'East face, 4.4 m above its base',
	deviationMm: 23,
	expandedUncertaintyMm: 3,
	limitsMm: [-10, 10],
	offsetMm: null,
	direction: [1, 0, 0],
	verdict: 'outside',
	beyondMm: 13,
};

/** Flags as rows, open and with the contractor, on a published check of nothing: for tests of what becomes of a flag. Their ids, by number. */
export async function raiseFlags(
	server: TestServer,
	{ siteId, surveyor, engineer, companyId }: { siteId: string; surveyor: Member; engineer: Member; companyId: string },
	count: number,
	over: (index: number) => Partial<FlagRow> = () => ({}),
): Promise<{ flagIds: string[]; checkId: string; surveyId: string; modelId: string; revisionId: string }> {
	const { platform } = server;
	const now = platform.now();
	const [modelId, revisionId, surveyId, checkId] = [randomUUID(), randomUUID(), randomUUID(), randomUUID()];
	const sheetId = await issuedSheet(server, engineer);
	const file = { fileName: 'made.csv', fileSha256: sha256 };
	await platform.db.insert(files).values({ sha256, bytes: 1, keptAt: now }).onConflictDoNothing();
	await platform.db.insert(models).values({ id: modelId, siteId, name: modelId });
	await platform.db.insert(revisions).values({
		...file,
		...{ id: revisionId, siteId, modelId, number: 1, fileBytes: 1, state: 'failed', reason: 'Made for a test.' },
		...{ uploadedBy: engineer.userId, uploadedAt: now },
	});
	const reading = { encoding: 'utf-8' as const, delimiter: ',' as const, decimalMark: '.' as const, hasHeader: true, unit: 'm' as const };
	await platform.db.insert(surveys).values({
		...file,
		...{ id: surveyId, siteId, number: 1, name: 'Survey', stage: 'before-pour', surveyedOn: '2025-11-26', observer: 'V. O.' },
		...{ instrument: 'Total station', serial: '4711', reading: { ...reading, columns: { name: 0 } }, state: 'ready' },
		...{ storedBy: surveyor.userId, storedAt: now },
	});
	const summary = { within: 0, outside: count, 'too-close-to-call': 0, undecided: 0, 'not-measured': 0, 'no-tolerance': 0 };
	await platform.db.insert(checks).values({
		...{ id: checkId, siteId, number: 1, revisionId, surveyId, sheetId, stage: 'before-pour', state: 'published', summary },
		...{ findings: [], inputsSha256: sha256, engineVersion: 'test', madeBy: surveyor.userId, madeAt: now },
		...{ publishedBy: surveyor.userId, publishedAt: now },
	});
	const rows = Array.from({ length: count }, (_, index): FlagRow => {
		const title = `C/${index + 1}, ground`;
		return {
			...{ id: randomUUID(), siteId, number: index + 1, modelId, globalId: `element ${index + 1}`, kind: 'face', mark: title, title },
			...{ companyId, state: 'open', isWith: 'contractor', verdict: 'outside', worstMm: 23, isInsideAlone: false, worst },
			...{ checkId, raisedCheckId: checkId, raisedAt: now, round: 1, answerBy: new Date(now.getTime() + 3 * 86_400_000) },
			...{ isDecidedWithoutAnswer: false, isConsentAwaited: false, version: 1, changedAt: now },
			...over(index),
		};
	});
	await platform.transaction((tx) => insertRows(tx, flags, rows));
	return { flagIds: rows.map(({ id }) => id), checkId, surveyId, modelId, revisionId };
}
