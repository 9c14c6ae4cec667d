import { ORPCError } from '@orpc/client';
import { describe, expect, it } from 'vitest';
import { type Send, type WaitingAct, waitingActs } from '#src/lib/waiting-acts.ts';

const noLine: Send = () => Promise.reject(new TypeError('Failed to fetch'));
const refused: Send = () => Promise.reject(new ORPCError('CONFLICT', { status: 409, message: 'Ida Roen has decided.' }));

function device(answer: Send) {
	const kept = new Map<string, WaitingAct>();
	const sent: unknown[] = [];
	let n = 0;
	let respond = answer;
	const acts = waitingActs({
		shelf: () => ({
			list: async () => [...kept.values()].sort((a, b) => a.keptAt.getTime() - b.keptAt.getTime()),
			put: async (act) => void kept.set(act.actId, act),
			drop: async (actId) => void kept.delete(actId),
		}),
		senders: {
			answer: async (input) => {
				await respond(input);
				sent.push(input);
			},
		},
		newId: () => {
			n += 1;
			return `act ${n}`;
		},
		clock: () => new Date(1_700_000_000_000 + n * 1000),
	});
	return { acts, sent, answerWith: (next: Send) => (respond = next) };
}
const answerOf = (input: unknown, userId = 'lena') => ({ userId, sender: 'answer', input, words: `Your answer ${String(input)}` });

describe('an act without a line', () => {
	it('is kept and sent in its order once there is one, each once', async () => {
		const { acts, sent, answerWith } = device(noLine);
		expect(await acts.sendOrKeep(answerOf('first'))).toBe('kept');
		expect(await acts.sendOrKeep(answerOf('second'))).toBe('kept');
		expect(acts.now().map(({ words }) => words)).toEqual(['Your answer first', 'Your answer second']);
		expect(await acts.sendAll('lena')).toBe(0);
		answerWith(async () => {});
		const rounds = await Promise.all([acts.sendAll('lena'), acts.sendAll('lena')]);
		expect(rounds).toEqual([2, 2]);
		expect(sent).toEqual(['first', 'second']);
		expect(acts.now()).toEqual([]);
	});

	it('of another person on the same device stays theirs', async () => {
		const { acts, sent, answerWith } = device(noLine);
		await acts.sendOrKeep(answerOf('mine', 'lena'));
		answerWith(async () => {});
		expect(await acts.sendAll('rob')).toBe(0);
		expect(sent).toEqual([]);
		expect(acts.now()).toHaveLength(1);
	});

	it('that the server then refuses stays with its reason until it is thrown away, and holds up nothing', async () => {
		const { acts, sent, answerWith } = device(noLine);
		await acts.sendOrKeep(answerOf('late'));
		await acts.sendOrKeep(answerOf('good'));
		answerWith((input) => (input === 'late' ? refused(input) : Promise.resolve()));
		expect(await acts.sendAll('lena')).toBe(1);
		expect(sent).toEqual(['good']);
		expect(acts.now()).toMatchObject([{ input: 'late', refusal: 'Ida Roen has decided.' }]);
		expect(await acts.sendAll('lena')).toBe(0);
		await acts.throwAway(acts.now()[0]!.actId);
		expect(acts.now()).toEqual([]);
	});

	it('waits on where the session has ended meanwhile', async () => {
		const { acts, answerWith } = device(noLine);
		await acts.sendOrKeep(answerOf('mine'));
		answerWith(() => Promise.reject(new ORPCError('UNAUTHORIZED', { status: 401, message: 'Sign in first.' })));
		expect(await acts.sendAll('lena')).toBe(0);
		expect(acts.now()).toMatchObject([{ refusal: null }]);
	});
});

it('a refusal while there is a line is said at once and nothing is kept', async () => {
	const { acts } = device(refused);
	await expect(acts.sendOrKeep(answerOf('late'))).rejects.toThrow('Ida Roen has decided.');
	expect(acts.now()).toEqual([]);
});
