import { useMutation } from '@tanstack/react-query';
import type { FitSummary } from '#shared/fit/contract.ts';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { Button } from '#src/ui/button.tsx';

/** The kept fit's report, as a file. */
export function ReportButton({ siteId, fit }: { siteId: string; fit: FitSummary }) {
	const report = useMutation({
		mutationFn: () => client.fit.report({ siteId, fitId: fit.fitId }),
		onSuccess: (blob) => saveBlob(blob, `fit-${fit.number}.pdf`),
	});
	return (
		<>
			<Button isBusy={report.isPending} onClick={() => report.mutate()}>
				Report, PDF
			</Button>
			{report.error && (
				<span role="alert" className="self-center font-medium">
					{refusalOf(report.error).message}
				</span>
			)}
		</>
	);
}
