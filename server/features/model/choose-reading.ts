import { and, eq } from 'drizzle-orm';
import { noLengthUnit, unitInWords, usualUnitsM } from '#shared/model/ifc-units.ts';
import type { MapScaleReading } from '#shared/model/reading-choices.ts';
import { readingChosen } from '../../db/schema/model.ts';
import { audit } from '../../platform/audit.ts';
import type { Member, Platform } from '../../platform/platform.ts';
import { Refused } from '../../platform/refuse.ts';
import { lockModel } from './newest-revision.ts';
import { modelOf, newestOf } from './said-of-reading.ts';

type Choice = { subject: 'unit'; metresPerUnit: number | null } | { subject: 'map-scale'; reading: MapScaleReading | null };
type Newest = Awaited<ReturnType<typeof newestOf>>['newest'];

/**
 * Keeps which reading of a file's unit or map scale holds, for later readings of the model; null takes it back. Refused unless the newest
 * revision leaves the question open (a unit: one of those it names, or a usual one where it names none).
 */
export async function chooseReading(
	platform: Platform,
	member: Member,
	{ modelId, choice, reason }: { modelId: string; choice: Choice; reason: string },
): Promise<void> {
	const { siteId } = member;
	const after = choice.subject === 'unit' ? (choice.metresPerUnit === null ? null : String(choice.metresPerUnit)) : choice.reading;
	await platform.transaction(async (tx) => {
		await modelOf(tx, siteId, modelId);
		await lockModel(tx, modelId);
		const { newest } = await newestOf(tx, modelId);
		if (after !== null) expectOpen(newest, choice);
		const key = and(eq(readingChosen.modelId, modelId), eq(readingChosen.subject, choice.subject));
		const [before] = await tx.delete(readingChosen).where(key).returning({ choice: readingChosen.choice });
		if (after !== null)
			await tx.insert(readingChosen).values({
				siteId,
				modelId,
				subject: choice.subject,
				choice: after,
				reason,
				chosenBy: member.userId,
				chosenAt: platform.now(),
			});
		const data = { subject: choice.subject, before: before?.choice ?? null, after, reason };
		await audit(tx, member, { kind: 'reading-chosen', subjectId: modelId, data });
	});
}

function expectOpen(newest: Newest, choice: Choice): void {
	const findings = newest?.reading?.findings ?? [];
	if (choice.subject === 'map-scale') {
		if (findings.some(({ code }) => code === 'map-scale')) return;
		throw new Refused(
			'nothing-to-choose',
			'The scale of the newest revision’s map conversion fits its units: there is nothing to choose.',
			'choice',
		);
	}
	const contradiction = findings.find(({ code }) => code === 'unit-contradiction');
	const isUnsaid = findings.some(({ code }) => code === 'unit-chosen') || (newest?.state === 'failed' && newest.reason === noLengthUnit);
	const open = isUnsaid ? usualUnitsM : readingsOf(contradiction?.evidence);
	if (open.length === 0)
		throw new Refused('nothing-to-choose', 'The newest revision says its length unit in one way: there is nothing to choose.', 'choice');
	const wanted = choice.metresPerUnit!;
	if (open.some((metres) => Math.abs(metres / wanted - 1) <= 1e-9)) return;
	throw new Refused('not-one-of-them', `Choose one of these units: ${open.map(unitInWords).join(', ')}.`, 'choice');
}

function readingsOf(evidence: Record<string, unknown> | undefined): number[] {
	const readings = evidence?.readings;
	if (!Array.isArray(readings)) return [];
	return readings.flatMap((one: unknown) =>
		typeof one === 'object' && one !== null && 'metresPerUnit' in one && typeof one.metresPerUnit === 'number' ? [one.metresPerUnit] : [],
	);
}
