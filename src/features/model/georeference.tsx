import { useId, useMemo, useState } from 'react';
import { designToMap, mapFrameOf, mapToDesign } from '#shared/control/map-frame.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { RevisionDetail } from '#shared/model/contract.ts';
import { numberOf } from '#src/ui/field.tsx';
import { frameWords } from './frame-words.ts';

type Reading = RevisionDetail['reading'];
type Typed = readonly [string, string, string];

const inputClass =
	'block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-2 text-right font-mono text-ink aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';

const shown = (place: Vector3): Typed => place.map((part) => part.toFixed(4)) as unknown as Typed;
const read = (typed: Typed): Vector3 | null => {
	const numbers = typed.map((part) => numberOf(part.replace(/[\s\u00a0]/g, ''), false));
	return numbers.every((part) => part !== null && Number.isFinite(part)) ? (numbers as unknown as Vector3) : null;
};

/** Where the model lies on the map, in words, and one point of either frame in the other: what is typed in one row stands in the other. */
export function Georeference({ reading }: { reading: Reading }) {
	const { mapConversion, metresPerUnit } = reading;
	const frame = useMemo(() => {
		if (mapConversion === null) return null;
		try {
			return mapFrameOf(mapConversion, metresPerUnit);
		} catch {
			return null;
		}
	}, [mapConversion, metresPerUnit]);
	const [typed, setTyped] = useState<{ side: 'design' | 'map'; parts: Typed }>({ side: 'design', parts: ['0', '0', '0'] });
	const place = read(typed.parts);
	const other =
		frame === null || place === null ? null : shown(typed.side === 'design' ? designToMap(frame, place) : mapToDesign(frame, place));
	const rowOf = (side: 'design' | 'map'): Typed => (typed.side === side ? typed.parts : (other ?? ['', '', '']));
	return (
		<section aria-label="Where the model lies" className="flex flex-col gap-2">
			<p className="m-0 max-w-[75ch]">{frameWords(mapConversion, metresPerUnit)} Everything is checked in the model’s own frame.</p>
			{frame !== null && (
				<details>
					<summary className="inline-flex min-h-9 cursor-pointer items-center font-medium text-action underline underline-offset-3 pointer-coarse:min-h-12">
						A point in both frames
					</summary>
					<div className="mt-1 flex max-w-176 flex-col gap-3">
						<Row
							legend="In the model, m"
							heads={['X', 'Y', 'Z']}
							values={rowOf('design')}
							isWrong={typed.side === 'design' && place === null}
							onType={(parts) => setTyped({ side: 'design', parts })}
						/>
						<Row
							legend="On the map, m"
							heads={['Easting', 'Northing', 'Height']}
							values={rowOf('map')}
							isWrong={typed.side === 'map' && place === null}
							onType={(parts) => setTyped({ side: 'map', parts })}
						/>
						<p role="status" className="m-0 text-small text-second">
							{place === null ? 'Write three numbers, in metres.' : 'To a tenth of a millimetre. Nothing is stored.'}
						</p>
					</div>
				</details>
			)}
		</section>
	);
}

interface RowProps {
	legend: string;
	heads: readonly [string, string, string];
	values: Typed;
	isWrong: boolean;
	onType: (parts: Typed) => void;
}

function Row({ legend, heads, values, isWrong, onType }: RowProps) {
	const id = useId();
	return (
		<fieldset className="m-0 border-0 p-0">
			<legend className="mb-1 p-0 font-medium">{legend}</legend>
			<div className="grid grid-cols-1 gap-2 tablet:grid-cols-3">
				{heads.map((head, at) => (
					<label key={head} htmlFor={`${id}-${head}`} className="flex flex-col gap-0.5 text-small text-second">
						{head}
						<input
							id={`${id}-${head}`}
							inputMode="decimal"
							autoComplete="off"
							aria-invalid={isWrong || undefined}
							value={values[at]}
							onChange={(event) => {
								const written = event.currentTarget.value;
								onType(values.map((before, part) => (part === at ? written : before)) as unknown as Typed);
							}}
							className={inputClass}
						/>
					</label>
				))}
			</div>
		</fieldset>
	);
}
