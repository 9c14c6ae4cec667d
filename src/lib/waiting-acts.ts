import { createStore, type UseStore, update, values } from 'idb-keyval';
import { useSyncExternalStore } from 'react';
import { refusalOf } from './api-error.ts';

/**
 * What a person did without a line: kept on this device and sent, in its order, once the server answers again. Our own queue, as a cache of
 * requests loses what was in flight when the page went away. Whoever takes the acts must take the same twice as once: an answer may have
 * arrived though its receipt did not.
 */

/** An act by the name of its sender, with all that the sender needs; files in it are kept as they are. */
export interface WaitingAct {
	actId: string;
	/** Only this person's session sends it. */
	userId: string;
	sender: string;
	input: unknown;
	/** "Your answer to C/3, ground": for the list of what waits. */
	words: string;
	keptAt: Date;
	/** What the server said against it; it stays until the person throws it away. */
	refusal: string | null;
}

/** Sends one act; throws what the call threw. */
export type Send = (input: unknown) => Promise<unknown>;

export type Outcome = 'sent' | 'kept';

interface Shelf {
	list: () => Promise<WaitingAct[]>;
	put: (act: WaitingAct) => Promise<void>;
	drop: (actId: string) => Promise<void>;
}

/** The browser's own database; throws where the browser keeps nothing (private windows of some). */
export function deviceShelf(store: UseStore = createStore('batterboard', 'waiting-acts')): Shelf {
	return {
		list: async () => (await values<WaitingAct>(store)).sort((a, b) => a.keptAt.getTime() - b.keptAt.getTime()),
		put: (act) => update<WaitingAct>(act.actId, () => act, store),
		drop: (actId) => store('readwrite', (shelf) => void shelf.delete(actId)),
	};
}

export interface WaitingActs {
	/** Sends at once; without a line keeps the act and answers `kept`. A refusal is thrown, nothing kept. */
	sendOrKeep: (act: Pick<WaitingAct, 'userId' | 'sender' | 'input' | 'words'>) => Promise<Outcome>;
	/** Sends what waits for this person, the oldest first, until one finds no line. Answers how many were sent. */
	sendAll: (userId: string) => Promise<number>;
	throwAway: (actId: string) => Promise<void>;
	/** The acts as last known, for `useSyncExternalStore`. */
	now: () => readonly WaitingAct[];
	onChange: (listener: () => void) => () => void;
	load: () => Promise<void>;
}

interface Parts {
	shelf: () => Shelf;
	senders: Readonly<Record<string, Send>>;
	newId: () => string;
	clock: () => Date;
}

export function waitingActs({ shelf, senders, newId, clock }: Parts): WaitingActs {
	let acts: readonly WaitingAct[] = [];
	let round: Promise<number> | null = null;
	const listeners = new Set<() => void>();
	const load = async () => {
		acts = await shelf().list();
		for (const listener of listeners) listener();
	};
	const send = async ({ sender, input }: Pick<WaitingAct, 'sender' | 'input'>): Promise<void> => {
		const sendIt = senders[sender];
		if (sendIt === undefined) throw new Error(`Nothing sends ${sender}.`);
		await sendIt(input);
	};
	const sendRound = async (userId: string) => {
		let sent = 0;
		for (const act of await shelf().list()) {
			if (act.userId !== userId || act.refusal !== null) continue;
			try {
				await send(act);
				await shelf().drop(act.actId);
				sent += 1;
			} catch (error) {
				const refusal = refusalOf(error);
				if (refusal.code === 'NO_LINE' || refusal.code === 'UNAUTHORIZED' || refusal.code === 'FAULT') break;
				await shelf().put({ ...act, refusal: refusal.message });
			}
		}
		await load();
		return sent;
	};
	return {
		sendOrKeep: async (act) => {
			try {
				await send(act);
				return 'sent';
			} catch (error) {
				if (refusalOf(error).code !== 'NO_LINE') throw error;
				await shelf().put({ ...act, actId: newId(), keptAt: clock(), refusal: null });
				await load();
				return 'kept';
			}
		},
		sendAll: (userId) => {
			round ??= sendRound(userId).finally(() => {
				round = null;
			});
			return round;
		},
		throwAway: async (actId) => {
			await shelf().drop(actId);
			await load();
		},
		now: () => acts,
		onChange: (listener) => {
			listeners.add(listener);
			return () => listeners.delete(listener);
		},
		load,
	};
}

/** What waits on this device, as it changes. */
export function useWaiting(waiting: WaitingActs): readonly WaitingAct[] {
	return useSyncExternalStore(waiting.onChange, waiting.now);
}
