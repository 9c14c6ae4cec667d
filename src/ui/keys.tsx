import { createContext, type ReactNode, useCallback, useContext, useEffect, useMemo, useRef, useState } from 'react';
import { Dialog } from './dialog.tsx';

interface KeyEntry {
	/** As KeyboardEvent.key gives it, lower case: "f", "?", "arrowdown". */
	key: string;
	/** What it does: "Frame what is chosen". */
	does: string;
	act: () => void;
}

type Register = (entry: KeyEntry) => () => void;
const KeysContext = createContext<Register | null>(null);

const standing: readonly { key: string; does: string }[] = [
	{ key: '↑ ↓', does: 'Move the choice along a table’s rows' },
	{ key: 'Home End', does: 'First and last row' },
	{ key: 'Enter', does: 'Open the chosen row' },
	{ key: '?', does: 'This list' },
];

function isTyping(target: EventTarget | null): boolean {
	return target instanceof HTMLElement && (target.isContentEditable || /^(INPUT|TEXTAREA|SELECT)$/.test(target.tagName));
}

/** Listens for single keys and shows their list on "?". Keys are silent while one types and while a dialog is open. */
export function KeysProvider({ children }: { children: ReactNode }) {
	const entries = useRef(new Set<KeyEntry>());
	const [shown, setShown] = useState<readonly { key: string; does: string }[] | null>(null);

	const register = useCallback<Register>((entry) => {
		entries.current.add(entry);
		return () => entries.current.delete(entry);
	}, []);
	const close = useCallback(() => setShown(null), []);

	useEffect(() => {
		const listen = (event: KeyboardEvent) => {
			if (event.defaultPrevented || event.ctrlKey || event.metaKey || event.altKey || isTyping(event.target)) return;
			if (document.querySelector('dialog[open]')) return;
			const key = event.key.toLowerCase();
			if (key === '?') {
				event.preventDefault();
				setShown([...[...entries.current].map((entry) => ({ key: keyName(entry.key), does: entry.does })), ...standing]);
				return;
			}
			const entry = [...entries.current].reverse().find((candidate) => candidate.key === key);
			if (!entry) return;
			event.preventDefault();
			entry.act();
		};
		window.addEventListener('keydown', listen);
		return () => window.removeEventListener('keydown', listen);
	}, []);

	return (
		<KeysContext.Provider value={register}>
			{children}
			<Dialog isOpen={shown !== null} onClose={close} title="Keys on this page">
				<dl className="m-0 grid grid-cols-[auto_1fr] gap-x-5 gap-y-2">
					{shown?.map((entry) => (
						<div key={entry.key + entry.does} className="contents">
							<dt className="font-mono font-medium whitespace-nowrap">{entry.key}</dt>
							<dd className="m-0">{entry.does}</dd>
						</div>
					))}
				</dl>
			</Dialog>
		</KeysContext.Provider>
	);
}

/** As it stands on the keyboard: "F", "Esc". */
function keyName(key: string): string {
	if (key === 'escape') return 'Esc';
	return key.charAt(0).toUpperCase() + key.slice(1);
}

/** Gives a single key a meaning while the component is there, and a line in the list on "?". Does nothing outside a KeysProvider. */
export function useKey(key: string, does: string, act: () => void): void {
	const register = useContext(KeysContext);
	const newest = useRef(act);
	useEffect(() => {
		newest.current = act;
	});
	const entry = useMemo(() => ({ key: key.toLowerCase(), does, act: () => newest.current() }), [key, does]);
	useEffect(() => register?.(entry), [register, entry]);
}
