import { hashGroups } from './record-words.ts';

/** A SHA-256 to be read aloud and compared; copied it is one word. */
export function HashText({ sha256 }: { sha256: string }) {
	return (
		<code className="font-mono text-small break-words" title={sha256}>
			{hashGroups(sha256)}
		</code>
	);
}
