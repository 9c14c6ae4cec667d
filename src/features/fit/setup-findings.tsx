import { useState } from 'react';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { Button } from '#src/ui/button.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { VoidDialog } from './void-dialog.tsx';

interface SetupFindingsProps {
	findings: readonly Finding[];
	/** Null: this person voids no points, or the fit is kept already. */
	voids: { siteId: string; setup: { setupId: string; name: string; adoptedFitId: string | null } } | null;
}

/** What the repeats of a set-up's targets tell of the set-up itself, ahead of what the fit tells of its pairs. */
export function SetupFindings({ findings, voids }: SetupFindingsProps) {
	const [isAsking, setIsAsking] = useState(false);
	const [first, ...others] = findings;
	if (first === undefined) return null;
	const { lastGoodRow } = first.evidence;
	const afterRow = typeof lastGoodRow === 'number' ? lastGoodRow : null;
	return (
		<FindingCard
			title={first.message}
			acts={
				voids !== null &&
				afterRow !== null && (
					<Button weight="act" onClick={() => setIsAsking(true)}>
						Void what came after row {afterRow}
					</Button>
				)
			}
		>
			{others.map(({ pairs, message }) => (
				<p key={pairs.join()} className="m-0">
					{message}
				</p>
			))}
			{afterRow !== null && (
				<p className="m-0 mt-1">Whatever was measured after the instrument moved lies wrong, in this fit and in every check on it.</p>
			)}
			{isAsking && voids !== null && afterRow !== null && (
				<VoidDialog
					siteId={voids.siteId}
					setup={voids.setup}
					afterRow={afterRow}
					reason={first.message.slice(0, 300)}
					hasAdoptedFit={voids.setup.adoptedFitId !== null}
					onClose={() => setIsAsking(false)}
				/>
			)}
		</FindingCard>
	);
}
