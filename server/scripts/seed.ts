import { readFile } from 'node:fs/promises';
import { z } from 'zod';
import type { FlagSummary } from '#shared/flag/contract.ts';
import type { FlagDecision } from '#shared/flag/flag-schema.ts';
import { sites } from '../db/schema/site.ts';
import type { Member, Platform } from '../platform/platform.ts';
import { addPeople, demoSentence } from './demo/people.ts';
import { addPour, call, cast, release, submit } from './demo/pours.ts';
import { dayMs } from './demo/stage.ts';
import { bringSurvey, check, type DemoGround, layGround, publish, tie } from './demo/story.ts';

/**
 * The demo site: every person, firm and figure on it is invented. The same at every run, through the same routes that people use, on the days
 * before today: forms measured, poured, measured as cast, flagged, answered, decided; so that each person finds something to do.
 */

/** What could never be shot on the invented site (fixtures/demo/README.md). */
const truth = z.object({ cannotBeShot: z.array(z.string()) });

/** Makes the demo site and answers the sentence to print. Null where any site is there already: nothing is touched where people work. */
export async function seedDemo(platform: Platform): Promise<string | null> {
	if ((await platform.db.select({ id: sites.id }).from(sites).limit(1)).length > 0) return null;
	const today = new Date(platform.now().getTime());
	today.setUTCHours(9, 0, 0, 0);
	/** So many days from today, at an hour, UTC. */
	const day = (days: number, hour: number) => new Date(today.getTime() + days * dayMs + (hour - 9) * 3_600_000);
	const date = (days: number) => day(days, 9).toISOString().slice(0, 10);

	const people = await addPeople(platform, day(-20, 8));
	const ground = await layGround(platform, people, day(-19, 9));
	await leaveOut(ground, day(-19, 11));
	const pourOf = (
		number: string,
		name: string,
		plannedAt: Date,
		elements: { storey: string; class: string }[],
		company: 'Fennick Forms' | 'Oster Steel' = 'Fennick Forms',
	) => addPour(ground, { number, name, company, plannedAt, elements }, day(-18, 10));
	const walls = await pourOf('3', 'sump walls', day(-12, 7), [{ storey: 'Sump', class: 'IfcWall' }]);
	const slabs = await pourOf('4', 'ground slabs', day(-12, 7), [{ storey: 'Ground', class: 'IfcSlab' }]);
	const plinths = await pourOf('5', 'plinths and bolts', day(-11, 7), [
		{ storey: 'Ground', class: 'IfcFooting' },
		{ storey: 'Ground', class: 'IfcMechanicalFastener' },
	]);
	const columns = await pourOf('6', 'ground columns', day(-10, 7), [{ storey: 'Ground', class: 'IfcColumn' }]);
	const stair = await pourOf('7', 'sump stair', day(1, 7), [{ storey: 'Sump', class: 'IfcStairFlight' }]);
	const roof = await pourOf('8', 'roof slabs', day(2, 13), [{ storey: 'Roof', class: 'IfcSlab' }]);
	await pourOf('9', 'roof beams', day(3, 7), [{ storey: 'Roof', class: 'IfcBeam' }]);
	await pourOf('10', 'ramp', day(7, 7), [{ storey: 'Ground', class: 'IfcRampFlight' }], 'Oster Steel');

	const forms = { fileName: 'survey-3.csv', name: 'forms and bolts', stage: 'before-pour', surveyedOn: date(-15), setups: ['F1'] } as const;
	const formsCheck = await checked(ground, forms, day(-15, 14));
	await publish(ground, formsCheck, day(-15, 15));
	await decide(ground, people.projectEngineer, isClose, day(-14, 9), takenAsMeasured('Shot twice more by the mini prism, 4 mm each time.'));
	await cast(ground, walls, day(-13, 16));
	await cast(ground, slabs, day(-13, 16));
	await cast(ground, plinths, day(-12, 16), [
		{ text: 'Caps on all bolts before the concrete.', owner: 'Fennick Forms', dueAt: day(-11, 7), proof: 'photo of each plinth' },
	]);
	await cast(ground, columns, day(-11, 16));

	const asCast = {
		fileName: 'survey-1.csv',
		name: 'as cast, below the roof',
		stage: 'as-cast',
		surveyedOn: date(-5),
		setups: ['S1', 'S2'],
	} as const;
	const asCastCheck = await checked(ground, asCast, day(-5, 14));
	await publish(ground, asCastCheck, day(-5, 16));
	await ground.as(people.siteEngineer, day(-4, 8)).check.withdraw({
		siteId: people.siteId,
		checkId: asCastCheck,
		reason: 'Published before the plinths’ list of points was gone through.',
	});
	const again = await check(ground, await newestSurvey(ground, day(-4, 9)), day(-4, 9));
	await publish(ground, again, day(-1, 9));
	await flagsMove(ground, day);

	const roofForms = { fileName: 'survey-4.csv', name: 'roof forms', stage: 'before-pour', surveyedOn: date(-1), setups: ['F2'] } as const;
	await publish(ground, await checked(ground, roofForms, day(-1, 14)), day(-1, 15));
	await release(ground, stair, 'before-pour', day(-1, 16));
	await submit(ground, roof, 'before-pour', day(-1, 17));
	await call(ground, slabs, 'after-pour', day(-1, 17));

	// For the site engineer: a survey that is not tied yet, the labels of two of its targets exchanged.
	await bringSurvey(
		ground,
		{ fileName: 'survey-2.csv', name: 'C/3 and plinths again', stage: 'as-cast', surveyedOn: date(0), setups: ['S1'] },
		platform.now(),
	);
	return demoSentence();
}

async function checked(ground: DemoGround, survey: Parameters<typeof bringSurvey>[1], at: Date): Promise<string> {
	const surveyId = await bringSurvey(ground, survey, at);
	await tie(ground, surveyId, at);
	return check(ground, surveyId, at);
}

async function newestSurvey({ people, as }: DemoGround, at: Date): Promise<string> {
	const [survey] = await as(people.siteEngineer, at).survey.list({ siteId: people.siteId });
	if (survey === undefined) throw new Error('The demo has no survey.');
	return survey.surveyId;
}

/** Nobody can shoot what is cast against other concrete: left out before any check, with the reason. */
async function leaveOut({ people, revisionId, as }: DemoGround, at: Date): Promise<void> {
	const { cannotBeShot } = truth.parse(JSON.parse(await readFile('fixtures/demo/truth.json', 'utf8')));
	await as(people.siteEngineer, at).model.chooseCheckpoints({
		siteId: people.siteId,
		revisionId,
		checkpointIds: cannotBeShot,
		requirement: 'left-out',
		reason: 'Cast against other concrete or the ground: no instrument can see it.',
	});
}

type Wanted = (flag: FlagSummary) => boolean;
const isClose: Wanted = ({ verdict, state }) => verdict === 'too-close-to-call' && state === 'open';
const isOpenOn =
	(part: RegExp): Wanted =>
	({ title, mark, state, verdict }) =>
		state === 'open' && verdict === 'outside' && part.test(`${mark} ${title}`);

const takenAsMeasured = (reason: string): FlagDecision => ({ kind: 'taken-as-measured', reason });

async function targets({ people, as }: DemoGround, member: Member, wanted: Wanted, at: Date) {
	const all = await as(member, at).flag.list({ siteId: people.siteId });
	return all.filter(wanted).map(({ flagId, version }) => ({ flagId, version }));
}

async function decide(ground: DemoGround, member: Member, wanted: Wanted, at: Date, decision: FlagDecision): Promise<void> {
	const { people, as } = ground;
	const flags = await targets(ground, member, wanted, at);
	if (flags.length > 0) await as(member, at).flag.decide({ siteId: people.siteId, flags, decision });
}

/** Flags in every state: C/3 stays open, the others are answered, decided, put right, closed; the first check's lapsed. */
async function flagsMove(ground: DemoGround, day: (days: number, hour: number) => Date): Promise<void> {
	const { people, as } = ground;
	const { siteId, contractor, projectEngineer } = people;
	const answer = async (part: RegExp, said: Parameters<ReturnType<typeof as>['flag']['answer']>[0]['answer'], at: Date) => {
		const flags = await targets(ground, contractor, isOpenOn(part), at);
		await as(contractor, at).flag.answer({ siteId, flags, answer: said });
		return flags.map(({ flagId }) => flagId);
	};
	const named =
		(ids: readonly string[]): Wanted =>
		({ flagId }) =>
			ids.includes(flagId);

	await answer(/bolt/i, { kind: 'concession', why: 'The base plate’s holes are oversize by 8 mm; the fitter is content.' }, day(-1, 11));
	const bulge = await answer(
		/wall/i,
		{ kind: 'put-right', means: 'repair', how: 'Grind the bulge back to 8 mm and re-seal the face.', by: day(6, 12) },
		day(-1, 11),
	);
	await decide(ground, projectEngineer, named(bulge), day(-1, 13), {
		kind: 'repair',
		reason: 'The liner needs 10 mm at most; cover stays above its least after grinding (demo).',
		by: day(6, 12),
	});
	const plinth = await answer(
		/footing/i,
		{ kind: 'put-right', means: 'repair', how: 'Bush-hammer, bed on 8 mm of non-shrink grout.', by: day(1, 12) },
		day(-1, 11),
	);
	await decide(ground, projectEngineer, named(plinth), day(-1, 13), { kind: 'repair', reason: 'As answered.', by: day(1, 12) });
	await as(contractor, day(0, 7)).flag.putRight({ siteId, flags: await targets(ground, contractor, named(plinth), day(0, 7)) });
	const slab = await answer(
		/slab/i,
		{ kind: 'concession', why: 'The southern edge lies under the screed; it takes up 20 mm.' },
		day(-1, 11),
	);
	await decide(ground, projectEngineer, named(slab), day(-1, 13), {
		kind: 'concession',
		reason: 'The screed over this strip is 65 mm thick; 20 mm less fall is no harm (demo).',
		conditions: 'Screed laid to level, not to thickness.',
		limits: { upToMm: 20, extent: 'southern edge, 1.2 m wide', number: 1, until: null, use: 'floor under screed' },
	});
}
