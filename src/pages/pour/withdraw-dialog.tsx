import type { HoldPointKind } from '#shared/pour/pour-life.ts';
import { WithdrawForm } from '#src/features/pour/withdraw-form.tsx';
import { useProof } from './use-proof.tsx';

interface WithdrawDialogBodyProps {
	siteId: string;
	pourId: string;
	point: HoldPointKind;
	timeZone: string;
	onWithdrawn: () => void;
}

/** The withdrawal of a release, signed as a release is. */
export function WithdrawDialogBody({ timeZone, ...form }: WithdrawDialogBodyProps) {
	const proof = useProof(timeZone);
	return (
		<>
			<WithdrawForm {...form} proof={proof.shown} whyNot={proof.whyNot} />
			{proof.dialog}
		</>
	);
}
