import { useId, useState } from 'react';
import type { FlagPhoto } from '#shared/flag/contract.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { isoMoment } from '#src/lib/format.ts';
import { buttonClass } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';

/** Opens the camera on a phone, a file chooser elsewhere, and sends what was taken. */
export function CameraButton({
	onTaken,
}: {
	/** Sends or keeps the photo; throws what the server refuses. */
	onTaken: (file: File) => Promise<unknown>;
}) {
	const id = useId();
	const [isSending, setIsSending] = useState(false);
	const [fault, setFault] = useState<string | null>(null);
	const take = async (file: File): Promise<void> => {
		setFault(null);
		setIsSending(true);
		try {
			await onTaken(file);
		} catch (error) {
			setFault(refusalOf(error).message);
		} finally {
			setIsSending(false);
		}
	};
	return (
		<div className="flex flex-col gap-2">
			<label htmlFor={id} className={`${buttonClass('quiet', 'flex-1')} relative cursor-pointer has-focus-visible:outline-3`}>
				{isSending ? 'Sending …' : 'Camera'}
				<input
					id={id}
					type="file"
					accept="image/jpeg,image/png,image/heic,image/heif"
					capture="environment"
					className="sr-only"
					disabled={isSending}
					onChange={(event) => {
						const [file] = event.target.files ?? [];
						event.target.value = '';
						if (file) void take(file);
					}}
				/>
			</label>
			{fault && <Notice kind="wrong" title={fault} />}
		</div>
	);
}

/** The flag's photos, each without its place; the original's hash beside it. */
export function FlagPhotos({ photos, timeZone }: { photos: readonly FlagPhoto[]; timeZone: string }) {
	if (photos.length === 0) return null;
	return (
		<section aria-labelledby="flag-photos">
			<h2 id="flag-photos" className="m-0 mt-5 mb-2 text-h2 font-strong">
				Photos
			</h2>
			<ul className="m-0 grid list-none grid-cols-2 gap-3 p-0 cabin:grid-cols-3">
				{photos.map((photo) => (
					<li key={photo.photoId} className="sheet overflow-hidden">
						{photo.shownAt === null ? (
							<p className="m-0 p-3 text-second">This format cannot be shown here.</p>
						) : (
							<a href={photo.shownAt} target="_blank" rel="noreferrer">
								<img
									src={photo.shownAt}
									alt={`By ${photo.addedBy}, ${isoMoment(photo.addedAt, timeZone)}`}
									loading="lazy"
									className="block aspect-4/3 w-full object-cover"
								/>
							</a>
						)}
						<p className="m-0 px-3 py-2 text-small text-second">
							{photo.addedBy}, {isoMoment(photo.addedAt, timeZone)}
							<span className="block truncate font-mono" title={`SHA-256 of the original: ${photo.originalSha256}`}>
								{photo.originalSha256.slice(0, 12)}
							</span>
						</p>
					</li>
				))}
			</ul>
		</section>
	);
}
