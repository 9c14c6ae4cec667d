import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import type { DemoGround } from './story.ts';

/** Pours of the invented site, and their hold points as people go through them. */

const hourMs = 3_600_000;

const formQuestions = ['Forms braced and oiled?', 'Cover and bars as drawn?', 'Clean, free of water?'];
const castQuestions = ['Curing as agreed?', 'Faces looked over, honeycombing marked?'];

interface DemoPour {
	number: string;
	name: string;
	company: 'Fennick Forms' | 'Oster Steel';
	plannedAt: Date;
	elements: { storey: string; class: string }[];
}

/** Adds a pour with its two lists and answers its id. */
export async function addPour({ people, modelId, as }: DemoGround, { company, ...pour }: DemoPour, at: Date): Promise<string> {
	const { siteId, projectEngineer, companyIds } = people;
	const companyId = companyIds.get(company);
	if (companyId === undefined) throw new Error(`The demo has no company ${company}.`);
	const client = as(projectEngineer, at);
	const { pourId } = await client.pour.add({ siteId, pour: { ...pour, companyId, modelId } });
	await client.pour.setList({ siteId, pourId, point: 'before-pour', questions: formQuestions });
	await client.pour.setList({ siteId, pourId, point: 'after-pour', questions: castQuestions });
	return pourId;
}

export async function call({ people, as }: DemoGround, pourId: string, point: HoldPointKind, at: Date): Promise<void> {
	const questions = point === 'before-pour' ? formQuestions : castQuestions;
	const answers = questions.map(() => 'yes');
	await as(people.contractor, at).pour.call({ siteId: people.siteId, pourId, point, readyFrom: at, answers });
}

/** Called, submitted, and so before the owner's representative. Says why where it is not ready. */
export async function submit(ground: DemoGround, pourId: string, point: HoldPointKind, at: Date): Promise<void> {
	await call(ground, pourId, point, at);
	const { people, as } = ground;
	const { siteId } = people;
	const client = as(people.projectEngineer, at);
	try {
		await client.pour.submit({ siteId, pourId, point });
	} catch (error) {
		const { readiness } = await client.pour.shown({ siteId, pourId, point });
		const against = readiness.filter(({ isGood }) => !isGood).map(({ text }) => text);
		throw new Error(`The demo's pour was not submitted: ${against.join(' ')}`, { cause: error });
	}
}

interface Condition {
	text: string;
	owner: string;
	dueAt: Date | null;
	proof: string;
}

export async function release(
	ground: DemoGround,
	pourId: string,
	point: HoldPointKind,
	at: Date,
	conditions: Condition[] = [],
): Promise<void> {
	await submit(ground, pourId, point, at);
	const { siteId, ownersRepresentative } = ground.people;
	const client = ground.as(ownersRepresentative, at);
	const { shownSha256 } = await client.pour.shown({ siteId, pourId, point });
	const statement = 'Seen on site and on the figures; released.';
	await client.pour.release({ siteId, pourId, point, statement, shownSha256, conditions });
}

/** Released at the end of the day before, then cast from seven o'clock. */
export async function cast(ground: DemoGround, pourId: string, at: Date, conditions: Condition[] = []): Promise<void> {
	await release(ground, pourId, 'before-pour', at, conditions);
	const begun = new Date(at.getTime() + 15 * hourMs);
	const over = new Date(at.getTime() + 19 * hourMs);
	const { siteId, contractor } = ground.people;
	await ground.as(contractor, begun).pour.beginConcreting({ siteId, pourId, at: begun });
	await ground.as(contractor, over).pour.endConcreting({ siteId, pourId, at: over, notCast: [] });
}
