import { useMutation, useQueryClient } from '@tanstack/react-query';
import type { StoredElement } from '#shared/model/contract.ts';
import { newMark } from '#shared/model/mark-rules.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';

interface NameBarProps {
	siteId: string;
	revisionId: string;
	elements: readonly StoredElement[];
	/** Names as typed, by element; null while none are being given. */
	typed: ReadonlyMap<string, string> | null;
	onBegin: () => void;
	onEnd: () => void;
}

/** Begins naming, and keeps what was typed: all names together or none, with what the server has against them. */
export function NameBar({ siteId, revisionId, elements, typed, onBegin, onEnd }: NameBarProps) {
	const queries = useQueryClient();
	const byId = new Map(elements.map((element) => [element.elementId, element]));
	const marks = [...(typed ?? [])]
		.map(([elementId, mark]) => ({ elementId, mark: mark.trim() }))
		.filter(({ elementId, mark }) => byId.get(elementId)?.mark !== mark);
	const wrong = marks.find(({ mark }) => !newMark.safeParse(mark).success);
	const keep = useMutation({
		mutationFn: () => client.model.renameMarks({ siteId, revisionId, marks }),
		onSuccess: async () => {
			await queries.invalidateQueries({ queryKey: api.model.key() });
			onEnd();
		},
	});
	if (typed === null) return <Button onClick={onBegin}>Give other marks</Button>;
	const whyNot =
		marks.length === 0
			? 'Write another mark into the table first.'
			: wrong
				? `${wrong.mark === '' ? 'An empty mark' : `"${wrong.mark}"`}: ${newMark.safeParse(wrong.mark).error?.issues[0]?.message ?? 'not possible.'}`
				: null;
	return (
		<div className="sheet flex flex-wrap items-center gap-2.5 border-ink px-3 py-2">
			<span className="min-w-0 flex-1 basis-64">
				At most 16 characters with a checkpoint’s own part. Marks are kept for later revisions and used by later checks.
			</span>
			<Button weight="act" isBusy={keep.isPending} whyNot={whyNot} onClick={() => keep.mutate()}>
				{marks.length > 0 ? `Keep ${counted(marks.length, 'mark')}` : 'Keep'}
			</Button>
			<Button weight="plain" onClick={onEnd}>
				Leave them as they were
			</Button>
			{keep.error && (
				<p role="alert" className="m-0 basis-full font-medium">
					{refusalOf(keep.error).message}
				</p>
			)}
		</div>
	);
}
