import { counted, nameList } from '../check/name-list.ts';
import type { RecordedCheckpoint, ShownPour } from '../record/sealed-record.ts';

/**
 * What is otherwise in a pour than when it was signed last, as sentences, for who is to sign it again: elements, verdicts, flags, what was left
 * out, answers of the list, checks it rests on. Empty: nothing of it.
 */
export function whatChanged(before: ShownPour, after: ShownPour): string[] {
	const said: string[] = [];
	const say = (names: readonly string[], one: string, many: string) => {
		if (names.length > 0) said.push(`${names.length} ${names.length === 1 ? one : many}: ${nameList(names)}.`);
	};
	const nameOf = ({ mark, title }: ShownPour['elements'][number]) => mark || title;
	const was = by(before.elements, elementKey);
	const is = by(after.elements, elementKey);
	say(missing(after.elements, was, elementKey).map(nameOf), 'element more', 'elements more');
	say(missing(before.elements, is, elementKey).map(nameOf), 'element fewer', 'elements fewer');
	say(
		after.elements.filter((one) => (was.get(elementKey(one))?.designSha256 ?? one.designSha256) !== one.designSha256).map(nameOf),
		'element moved or reshaped by the design',
		'elements moved or reshaped by the design',
	);
	const verdictBefore = by(before.checkpoints, pointKey);
	const changed = after.checkpoints.filter((one) => (verdictBefore.get(pointKey(one))?.verdict ?? one.verdict) !== one.verdict);
	for (const one of changed.slice(0, mostPoints))
		said.push(`${one.label}: ${verdictWords(verdictBefore.get(pointKey(one)) ?? one)} then, ${verdictWords(one)} now.`);
	if (changed.length > mostPoints) said.push(`${changed.length - mostPoints} more points are judged otherwise.`);
	const again = after.checkpoints.filter((one) => {
		const old = verdictBefore.get(pointKey(one));
		return old !== undefined && old.verdict === one.verdict && old.check !== one.check;
	});
	if (again.length > 0) said.push(`${counted(again.length, 'point')} measured again, judged as before.`);
	const leftBefore = by(before.leftOut, pointKey);
	const leftNow = by(after.leftOut, pointKey);
	say(
		missing(after.leftOut, leftBefore, pointKey).map(({ label }) => label),
		'point more left out',
		'points more left out',
	);
	say(
		missing(before.leftOut, leftNow, pointKey).map(({ label }) => label),
		'point no longer left out',
		'points no longer left out',
	);
	const flagBefore = by(before.flags, ({ flagId }) => flagId);
	for (const flag of after.flags)
		if (flagBefore.get(flag.flagId)?.outcome !== flag.outcome) said.push(`Flag on ${flag.mark}, ${flag.characteristic}: ${flag.outcome}.`);
	const answerBefore = new Map(before.pour.list.map(({ question, answer }) => [question, answer]));
	for (const { question, answer } of after.pour.list)
		if (answerBefore.get(question) !== answer) said.push(`${question} ${answer ?? 'not answered'}.`);
	return said;
}

const mostPoints = 20;
const elementKey = ({ modelId, globalId }: { modelId: string; globalId: string }): string => `${modelId} ${globalId}`;
const pointKey = ({ modelId, checkpointId }: { modelId: string; checkpointId: string }): string => `${modelId} ${checkpointId}`;

function by<T>(rows: readonly T[], keyOf: (row: T) => string): Map<string, T> {
	return new Map(rows.map((row) => [keyOf(row), row]));
}

function missing<T>(rows: readonly T[], among: ReadonlyMap<string, T>, keyOf: (row: T) => string): T[] {
	return rows.filter((row) => !among.has(keyOf(row)));
}

function verdictWords({ verdict }: RecordedCheckpoint): string {
	return verdict.replaceAll('-', ' ');
}
