import { type DragEvent, type ReactNode, useId, useState } from 'react';
import { bytes } from '#src/lib/format.ts';

interface FileDropProps {
	/** What is wanted: "The model, an IFC file". */
	label: ReactNode;
	/** Formats, sizes, what happens with it. */
	hint?: ReactNode;
	/** As for an input: ".ifc,.csv". */
	accept: string;
	file: File | null;
	onFile: (file: File) => void;
	error?: string | null;
}

/** A file by press, by key or by drop: one press area, at least 48 px for a finger. */
export function FileDrop({ label, hint, accept, file, onFile, error = null }: FileDropProps) {
	const id = useId();
	const [isOver, setIsOver] = useState(false);
	const drop = (event: DragEvent) => {
		event.preventDefault();
		setIsOver(false);
		const dropped = event.dataTransfer.files[0];
		if (dropped) onFile(dropped);
	};
	const over = (event: DragEvent) => {
		event.preventDefault();
		setIsOver(true);
	};
	return (
		<div className="flex flex-col gap-1">
			<label
				htmlFor={id}
				onDrop={drop}
				onDragOver={over}
				onDragEnter={over}
				onDragLeave={() => setIsOver(false)}
				className={`flex min-h-24 cursor-pointer flex-wrap items-center gap-x-4 gap-y-2 rounded-corner border-[1.5px] bg-sheet px-4.5 py-4 hover:border-ink has-focus-visible:outline-3 has-focus-visible:outline-offset-2 has-focus-visible:outline-ink ${isOver ? 'border-solid border-ink shadow-[inset_0_0_0_2px_var(--color-ink)]' : 'border-dashed border-field'}`}
			>
				<input
					id={id}
					type="file"
					accept={accept}
					className="sr-only"
					aria-describedby={error ? `${id}-error` : undefined}
					onChange={(event) => {
						const chosen = event.currentTarget.files?.[0];
						// The same file may be chosen again after a fault.
						event.currentTarget.value = '';
						if (chosen) onFile(chosen);
					}}
				/>
				<span className="min-w-0 flex-1 basis-56">
					<span className="block font-strong">{file ? file.name : label}</span>
					<span className="block text-second">{file ? bytes(file.size) : hint}</span>
				</span>
				<span className="inline-flex min-h-11 items-center rounded-corner border-[1.5px] border-action px-4.5 font-medium text-action pointer-coarse:min-h-12">
					{file ? 'Another file' : isOver ? 'Let go here' : 'Choose a file, or drop it here'}
				</span>
			</label>
			{error && (
				<p id={`${id}-error`} role="alert" className="m-0 font-medium">
					{error}
				</p>
			)}
		</div>
	);
}
