import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { useNavigate } from 'react-router-dom';
import type { SheetSummary } from '#shared/tolerance/contract.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { ReasonDialog } from '#src/features/fit/reason-dialog.tsx';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { useMay } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { SheetWeighed } from './sheet-weighed.tsx';

type WholeSheet = SheetSummary & { sheet: ToleranceSheet; contentSha256: string };

/** A project engineer begins a draft from a sheet, issues it with a reason, or throws the draft away. */
export function SheetActs({ siteId, sheet, isUnkept }: { siteId: string; sheet: WholeSheet; isUnkept: boolean }) {
	const mayWrite = useMay('tolerance.write');
	const queries = useQueryClient();
	const navigate = useNavigate();
	const [isIssuing, setIssuing] = useState(false);
	const begin = useMutation({
		mutationFn: () => client.tolerance.saveDraft({ siteId, sheetId: null, seenSha256: null, sheet: sheet.sheet }),
		onSuccess: async ({ sheetId }) => {
			await queries.invalidateQueries({ queryKey: api.tolerance.key() });
			navigate(`/sites/${siteId}/sheets/${sheetId}`);
		},
	});
	const discard = useMutation({
		mutationFn: () => client.tolerance.discardDraft({ siteId, sheetId: sheet.sheetId }),
		onSuccess: async () => {
			navigate(`/sites/${siteId}/sheets`);
			await queries.invalidateQueries({ queryKey: api.tolerance.list.key() });
		},
	});
	if (!mayWrite) return null;
	const error = begin.error ?? discard.error;
	return (
		<>
			{error && <Notice kind="wrong" title={refusalOf(error).message} />}
			{sheet.state === 'draft' ? (
				<>
					<Button isBusy={discard.isPending} onClick={() => discard.mutate()}>
						Discard the draft
					</Button>
					<Button
						weight="act"
						whyNot={isUnkept ? 'What you changed is not kept yet. Keep the draft, then issue it.' : null}
						onClick={() => setIssuing(true)}
					>
						Issue …
					</Button>
				</>
			) : (
				<Button isBusy={begin.isPending} onClick={() => begin.mutate()}>
					Begin a draft from it
				</Button>
			)}
			{isIssuing && (
				<ReasonDialog
					title={`Issue ${sheet.name}`}
					hint="Every later sign-off repeats it. The sheet issued before is superseded."
					act="Issue the sheet"
					usual={[]}
					longest={500}
					onSay={async (reason) => {
						await client.tolerance.issue({ siteId, sheetId: sheet.sheetId, seenSha256: sheet.contentSha256, reason });
						setIssuing(false);
						await queries.invalidateQueries();
					}}
					onClose={() => setIssuing(false)}
				>
					<SheetWeighed siteId={siteId} sheet={sheet.sheet} isDraft />
				</ReasonDialog>
			)}
		</>
	);
}
