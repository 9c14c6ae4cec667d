import type { FitResult } from '#shared/fit/fit-schema.ts';
import { metres, signedNumber } from '#src/lib/format.ts';
import { turnWords } from './fit-words.ts';

interface FitFiguresProps {
	fit: FitResult;
	/** SHA-256 of all that went in, for a kept fit. */
	inputsSha256?: string | null;
}

/** What the fit found, and how it stands against chance. */
export function FitFigures({ fit, inputsSha256 = null }: FitFiguresProps) {
	const rows: [string, string][] = [
		['Carries', `${turnWords(fit.rotation)}, shifted ${fit.translation.map((value) => metres(value)).join(', ')} m`],
		['Scale', fit.scale === 1 ? '1, the instrument’s own' : `${signedNumber((fit.scale - 1) * 1e6, 1)} ppm from 1`],
		['rms', fit.rms >= 1 ? `${fit.rms.toFixed(3)} m` : `${(fit.rms * 1000).toFixed(1)} mm`],
		['Redundancy', fit.redundancy === 0 ? '0: the residuals prove nothing' : String(fit.redundancy)],
	];
	if (fit.varianceFactor !== null && fit.chiSquare)
		rows.push([
			'Variance factor',
			`${fit.varianceFactor.toFixed(2)}; vᵀPv ${fit.chiSquare.statistic.toFixed(1)}, 95 % lies between ${fit.chiSquare.lower.toFixed(1)} and ${fit.chiSquare.upper.toFixed(1)}: ${chiSquareWords(fit)}`,
		]);
	if (inputsSha256) rows.push(['Inputs, SHA-256', inputsSha256]);
	return (
		<dl className="sheet m-0 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1.5 px-4.5 py-4">
			{rows.map(([name, value]) => (
				<div key={name} className="contents">
					<dt className="text-second">{name}</dt>
					<dd className={`m-0 min-w-0 ${name === 'Inputs, SHA-256' ? 'font-mono text-small break-all' : ''}`}>{value}</dd>
				</div>
			))}
		</dl>
	);
}

function chiSquareWords({ chiSquare }: FitResult): string {
	if (!chiSquare) return '';
	if (chiSquare.passes) return 'as the σ say';
	return chiSquare.statistic > chiSquare.upper
		? 'more misfit than the σ allow; the fit’s u is multiplied by σ̂₀'
		: 'less misfit than the σ say: are they too large, or was the control made from this survey?';
}
