import { useMutation } from '@tanstack/react-query';
import { useState } from 'react';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { Button } from '#src/ui/button.tsx';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { Dialog } from '#src/ui/dialog.tsx';

interface FieldListProps {
	siteId: string;
	revisionId: string;
	/** "Structure rev 4". */
	name: string;
	storeys: readonly string[];
	/** Why the map frame cannot be had; null: it can. */
	whyNoMap: string | null;
}

type Frame = 'design' | 'map';

/** Takes the marks outside: a CSV for the field controller, in either frame, of the whole or of one storey. Its points come back by their marks. */
export function FieldList({ siteId, revisionId, name, storeys, whyNoMap }: FieldListProps) {
	const [isOpen, setOpen] = useState(false);
	const [frame, setFrame] = useState<Frame>('design');
	const [storey, setStorey] = useState('');
	const take = useMutation({
		mutationFn: () => client.model.fieldCsv({ siteId, revisionId, frame, storey: storey === '' ? null : storey }),
		onSuccess: (blob) => {
			saveBlob(blob, `${name}${storey === '' ? '' : ` ${storey}`} ${frame}.csv`);
			setOpen(false);
		},
	});
	return (
		<>
			<Button onClick={() => setOpen(true)}>Take marks outside</Button>
			<Dialog
				isOpen={isOpen}
				onClose={() => setOpen(false)}
				title="Marks for the field controller"
				acts={
					<Button weight="act" isBusy={take.isPending} onClick={() => take.mutate()}>
						Download CSV
					</Button>
				}
			>
				<div className="flex flex-col gap-4">
					<p className="m-0">
						mark, easting, northing, height, code; metres. What is left out is not in it. Points measured under these marks meet their
						checkpoints by name.
					</p>
					<ChoiceGroup<Frame>
						legend="In which frame"
						isRow
						value={frame}
						onChange={setFrame}
						options={[
							{ value: 'design', label: 'The model’s own', detail: 'X, Y, Z' },
							{ value: 'map', label: 'The map', detail: 'easting, northing, height', ...(whyNoMap !== null && { whyNot: whyNoMap }) },
						]}
					/>
					<label className="flex flex-col gap-1 font-medium">
						Of which storey
						<select
							value={storey}
							onChange={(event) => setStorey(event.currentTarget.value)}
							className="min-h-11 rounded-corner border-[1.5px] border-field bg-sheet px-3 font-normal text-ink pointer-coarse:min-h-12"
						>
							<option value="">all</option>
							{storeys.map((one) => (
								<option key={one} value={one}>
									{one}
								</option>
							))}
						</select>
					</label>
					{take.error && (
						<p role="alert" className="m-0 font-medium">
							{refusalOf(take.error).message}
						</p>
					)}
				</div>
			</Dialog>
		</>
	);
}
