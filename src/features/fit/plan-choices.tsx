import { useId, useState } from 'react';
import { FieldFrame, numberOf } from '#src/ui/field.tsx';
import type { PlannedInstrument } from './survey-plan.ts';

interface PlanChoicesProps {
	instrument: PlannedInstrument;
	onInstrument: (instrument: PlannedInstrument) => void;
}

const inputClass =
	'min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body text-ink aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';

/** What the instrument can do, one standard deviation each. */
export function PlanChoices({ instrument, onInstrument }: PlanChoicesProps) {
	const kindId = useId();
	const put = (part: Partial<PlannedInstrument>) => onInstrument({ ...instrument, ...part });
	return (
		<div className="grid grid-cols-2 gap-3.5 tablet:grid-cols-3">
			<FieldFrame id={kindId} label="Instrument">
				<select
					id={kindId}
					value={instrument.fit}
					onChange={(event) => put({ fit: event.currentTarget.value === 'free' ? 'free' : 'levelled' })}
					className={inputClass}
				>
					<option value="levelled">levelled</option>
					<option value="free">free, no compensator</option>
				</select>
			</FieldFrame>
			<Millimetres label="σ target, plan" value={instrument.targetPlanMm} onValue={(targetPlanMm) => put({ targetPlanMm })} />
			<Millimetres label="σ target, height" value={instrument.targetHeightMm} onValue={(targetHeightMm) => put({ targetHeightMm })} />
			<Millimetres label="Common part" value={instrument.commonMm} onValue={(commonMm) => put({ commonMm })} mayBeNil />
			<Millimetres label="σ shot, plan" value={instrument.shotPlanMm} onValue={(shotPlanMm) => put({ shotPlanMm })} />
			<Millimetres label="σ shot, height" value={instrument.shotHeightMm} onValue={(shotHeightMm) => put({ shotHeightMm })} />
		</div>
	);
}

interface MillimetresProps {
	label: string;
	value: number;
	onValue: (value: number) => void;
	mayBeNil?: boolean;
}

function Millimetres({ label, value, onValue, mayBeNil = false }: MillimetresProps) {
	const id = useId();
	const [typed, setTyped] = useState(String(value));
	const number = numberOf(typed, false) ?? Number.NaN;
	const isFine = (one: number) => one <= 1000 && (mayBeNil ? one >= 0 : one > 0);
	const error = isFine(number) ? undefined : mayBeNil ? 'From 0 to 1000 mm.' : 'More than 0 mm.';
	return (
		<FieldFrame id={id} label={`${label}, mm`} error={error}>
			<input
				id={id}
				inputMode="decimal"
				autoComplete="off"
				value={typed}
				aria-invalid={error ? true : undefined}
				onChange={(event) => {
					setTyped(event.currentTarget.value);
					const next = numberOf(event.currentTarget.value, false) ?? Number.NaN;
					if (isFine(next)) onValue(next);
				}}
				className={`${inputClass} text-right`}
			/>
		</FieldFrame>
	);
}
