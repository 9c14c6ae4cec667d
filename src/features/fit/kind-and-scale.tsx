import { useId, useState } from 'react';
import type { FitKind } from '#shared/fit/fit-schema.ts';
import { describedBy, FieldFrame, numberOf } from '#src/ui/field.tsx';
import { kindWords } from './fit-words.ts';

interface KindAndScaleProps {
	kinds: readonly FitKind[];
	kind: FitKind;
	onKind: (kind: FitKind) => void;
	knownScale: number | null;
	onKnownScale: (scale: number | null) => void;
}

/** Which fit, and a known factor where it takes one. */
export function KindAndScale({ kinds, kind, onKind, knownScale, onKnownScale }: KindAndScaleProps) {
	const kindId = useId();
	const scaleId = useId();
	const [typed, setTyped] = useState(knownScale === null ? '' : String(knownScale));
	const number = numberOf(typed, true);
	const isWrong = number !== null && !(number >= 0.5 && number <= 2);
	const inputClass =
		'min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body text-ink aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';
	return (
		<div className="grid gap-3.5 tablet:grid-cols-2">
			<FieldFrame id={kindId} label="Fit">
				<select id={kindId} value={kind} onChange={(event) => onKind(event.currentTarget.value as FitKind)} className={inputClass}>
					{kinds.map((option) => (
						<option key={option} value={option}>
							{kindWords[option]}
						</option>
					))}
				</select>
			</FieldFrame>
			{!kind.endsWith('-scaled') && kind !== 'height' && (
				<FieldFrame
					id={scaleId}
					label="Known grid/ground factor, plan only"
					error={isWrong ? 'A factor lies near 1: between 0.5 and 2.' : undefined}
				>
					<input
						id={scaleId}
						inputMode="decimal"
						autoComplete="off"
						placeholder="1"
						value={typed}
						aria-invalid={isWrong || undefined}
						aria-describedby={describedBy(scaleId, false, isWrong)}
						onChange={(event) => {
							setTyped(event.currentTarget.value);
							const next = numberOf(event.currentTarget.value, true);
							if (next === null || (next >= 0.5 && next <= 2)) onKnownScale(next);
						}}
						className={`${inputClass} text-right`}
					/>
				</FieldFrame>
			)}
		</div>
	);
}
