import { useState } from 'react';
import type { PublishedKey } from '#shared/record/contract.ts';
import { readPublicKeys } from '#shared/record/public-key.ts';
import { HashText } from '#src/features/record/hash-text.tsx';
import { saveBlob } from '#src/lib/save-blob.ts';
import { Button } from '#src/ui/button.tsx';
import { FileDrop } from '#src/ui/file-drop.tsx';

/** A key somebody chose to trust, as PEM. */
export interface KeyChoice {
	sha256: string;
	pem: string;
}

interface ChosenKeysProps {
	chosen: readonly KeyChoice[];
	onChange: (chosen: readonly KeyChoice[]) => void;
	/** What this server publishes; null while it is not known. */
	published: readonly PublishedKey[] | null;
	isWithoutServer: boolean;
}

/** Whose signature counts: keys from a file, or those this server publishes. None is chosen by itself. */
export function ChosenKeys({ chosen, onChange, published, isWithoutServer }: ChosenKeysProps) {
	const [file, setFile] = useState<File | null>(null);
	const [fault, setFault] = useState<string | null>(null);
	const isChosen = (sha256: string) => chosen.some((key) => key.sha256 === sha256);
	const take = async (next: File) => {
		setFile(next);
		setFault(null);
		try {
			const pem = await next.text();
			const read = await readPublicKeys(pem);
			onChange([
				...chosen.filter(({ sha256 }) => !read.some((key) => key.sha256 === sha256)),
				...read.map(({ sha256 }) => ({ sha256, pem })),
			]);
		} catch (error) {
			setFault(error instanceof Error ? error.message : 'The file cannot be read.');
		}
	};
	const known = new Map((published ?? []).map((key) => [key.sha256, key]));
	const others = chosen.filter(({ sha256 }) => !known.has(sha256));
	const toggle = (key: KeyChoice) =>
		onChange(isChosen(key.sha256) ? chosen.filter(({ sha256 }) => sha256 !== key.sha256) : [...chosen, key]);
	return (
		<fieldset className="m-0 flex flex-col gap-2 border-0 p-0">
			<legend className="mb-1 p-0 font-medium">Whose signature counts</legend>
			<p className="m-0 max-w-[70ch] text-small text-second">
				Best a key you got from elsewhere, as at the handing over of the site. A key inside the record itself proves nothing.
			</p>
			<FileDrop label="A key" hint="A .pem file" accept=".pem" file={file} onFile={take} error={fault} />
			<ul className="m-0 list-none p-0">
				{others.map((key) => (
					<KeyRow key={key.sha256} sha256={key.sha256} word="From your file" isChosen onToggle={() => toggle(key)} />
				))}
				{published?.map(({ sha256, publicKeyPem, publishedAt, retiredAt }) => (
					<KeyRow
						key={sha256}
						sha256={sha256}
						word={`Published by this server since ${day(publishedAt)}${retiredAt === null ? ', in use' : `, until ${day(retiredAt)}`}`}
						isChosen={isChosen(sha256)}
						onToggle={() => toggle({ sha256, pem: publicKeyPem })}
						onSave={() =>
							saveBlob(new Blob([publicKeyPem], { type: 'application/x-pem-file' }), `batterboard-key-${sha256.slice(0, 8)}.pem`)
						}
					/>
				))}
			</ul>
			{isWithoutServer && <p className="m-0 text-second">The server was not reached, so it offers no keys. A key from a file will do.</p>}
		</fieldset>
	);
}

interface KeyRowProps {
	sha256: string;
	word: string;
	isChosen: boolean;
	onToggle: () => void;
	onSave?: () => void;
}

function KeyRow({ sha256, word, isChosen, onToggle, onSave }: KeyRowProps) {
	return (
		<li className="flex flex-wrap items-center gap-x-4 border-b border-hair py-1">
			<label className="flex min-h-12 min-w-0 flex-1 cursor-pointer items-center gap-3">
				<input type="checkbox" className="size-5 shrink-0 accent-ink" checked={isChosen} onChange={onToggle} />
				<span className="min-w-0">
					<span className="block">{word}</span>
					<HashText sha256={sha256} />
				</span>
			</label>
			{onSave && (
				<Button weight="plain" onClick={onSave}>
					Save it
				</Button>
			)}
		</li>
	);
}

function day(at: Date): string {
	return at.toISOString().slice(0, 10);
}
