import type { ReactNode } from 'react';
import type { RevisionDetail } from '#shared/model/contract.ts';
import { FindingCard } from '#src/ui/finding-card.tsx';

type Finding = RevisionDetail['reading']['findings'][number];

/** How a reading that a finding holds against another is called. */
const readingWords: Readonly<Record<string, string>> = {
	asWritten: 'As the file has it',
	byUnits: 'As the units alone would have it',
	written: 'Written',
	readAs: 'Read as',
	expectedScale: 'Scale by the units',
	scale: 'Scale',
	metreScale: 'Map metres for a metre of the model',
	mapMetresPerModelMetre: 'Map metres for a metre of the model',
	shiftM: 'Shift, m',
	isTurned: 'Turned',
	count: 'How many',
};

/** What was found in the file: the sentence, and beneath it each reading with its figures, where there are two. */
export function ModelFindings({ findings, actsOf }: { findings: readonly Finding[]; actsOf?: (finding: Finding) => ReactNode }) {
	if (findings.length === 0) return null;
	return (
		<section aria-label="What was found in the file" className="flex flex-col gap-3">
			{findings.map((finding) => {
				const readings = readingsOf(finding.evidence);
				return (
					<FindingCard key={finding.code + finding.message} title={finding.message} acts={actsOf?.(finding)}>
						{readings.length > 0 && (
							<dl className="m-0 grid grid-cols-[auto_1fr] gap-x-4 gap-y-1">
								{readings.map(([name, value]) => (
									<div key={name} className="contents">
										<dt>{name}</dt>
										<dd className="m-0 font-mono">{value}</dd>
									</div>
								))}
							</dl>
						)}
					</FindingCard>
				);
			})}
		</section>
	);
}

/** Evidence as names and figures, one reading a line; what the sentence says already (a lone count) is left away. */
function readingsOf(evidence: Finding['evidence']): [string, string][] {
	const entries = Object.entries(evidence).filter(([name]) => name in readingWords);
	if (entries.length < 2) return [];
	return entries.map(([name, value]) => [readingWords[name]!, words(value)]);
}

function words(value: unknown): string {
	if (Array.isArray(value)) return value.map(words).join(', ');
	if (typeof value === 'object' && value !== null)
		return Object.entries(value)
			.map(([name, part]) => `${(readingWords[name] ?? name).toLowerCase()} ${words(part)}`)
			.join(', ');
	if (typeof value === 'boolean') return value ? 'yes' : 'no';
	return typeof value === 'number' ? String(Number(value.toPrecision(9))) : String(value);
}
