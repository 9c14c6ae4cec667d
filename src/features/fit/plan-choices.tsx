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
		<div className="grid grid-cols-2 items-end gap-3.5 tablet:grid-cols-3">
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
			<Quantity label="σ distance" unit="mm" value={instrument.distanceMm} onValue={(distanceMm) => put({ distanceMm })} />
			<Quantity
				label="and growing with it"
				unit="ppm"
				value={instrument.distancePpm}
				onValue={(distancePpm) => put({ distancePpm })}
				mayBeNil
			/>
			<Quantity label="σ angle" unit="″" value={instrument.angleSec} onValue={(angleSec) => put({ angleSec })} />
			<Quantity label="σ target on its mark" unit="mm" value={instrument.targetMm} onValue={(targetMm) => put({ targetMm })} mayBeNil />
			<Quantity label="σ shot, pole and surface" unit="mm" value={instrument.shotMm} onValue={(shotMm) => put({ shotMm })} mayBeNil />
			<Quantity label="Common part" unit="mm" value={instrument.commonMm} onValue={(commonMm) => put({ commonMm })} mayBeNil />
			<Quantity label="Sighted no further than" unit="m" value={instrument.reachM} onValue={(reachM) => put({ reachM })} />
		</div>
	);
}

interface QuantityProps {
	label: string;
	unit: string;
	value: number;
	onValue: (value: number) => void;
	mayBeNil?: boolean;
	/** Coordinates may be of any sign and map size. */
	isCoordinate?: boolean;
}

/** A number with its unit that is passed on while it is one that can be computed with. */
export function Quantity({ label, unit, value, onValue, mayBeNil = false, isCoordinate = false }: QuantityProps) {
	const id = useId();
	const [typed, setTyped] = useState(String(value).replace('-', '−'));
	const number = numberOf(typed, false) ?? Number.NaN;
	const isFine = (one: number) => (isCoordinate ? Math.abs(one) < 1e8 : one <= 1000 && (mayBeNil ? one >= 0 : one > 0));
	const error = isFine(number)
		? undefined
		: isCoordinate
			? 'A coordinate, in metres.'
			: `${mayBeNil ? 'From 0' : 'Over 0'} to 1000 ${unit}.`;
	return (
		<FieldFrame id={id} label={`${label}, ${unit}`} error={error}>
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
