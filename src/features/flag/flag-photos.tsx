import { useId, useState } from 'react';
import type { FlagPhoto } from '#shared/flag/contract.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { isoMoment } from '#src/lib/format.ts';
import { UploadFault, uploadFile } from '#src/lib/upload.ts';
import { buttonClass } from '#src/ui/button.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';

/** Opens the camera on a phone, a file chooser elsewhere, and sends what was taken. */
export function CameraButton({
	siteId,
	userId,
	onTaken,
}: {
	siteId: string;
	userId: string;
	/** The upload's id; throws what the server refuses. */
	onTaken: (uploadId: string) => Promise<unknown>;
}) {
	const id = useId();
	const [sent, setSent] = useState<{ done: number; of: number } | null>(null);
	const [fault, setFault] = useState<string | null>(null);
	const take = async (file: File): Promise<void> => {
		setFault(null);
		setSent({ done: 0, of: file.size });
		try {
			const uploadId = await uploadFile({ file, siteId, userId, purpose: 'photo', onProgress: (done, of) => setSent({ done, of }) });
			await onTaken(uploadId);
		} catch (error) {
			setFault(error instanceof UploadFault ? error.message : refusalOf(error).message);
		} finally {
			setSent(null);
		}
	};
	return (
		<div className="flex flex-col gap-2">
			<label htmlFor={id} className={`${buttonClass('quiet')} cursor-pointer has-focus-visible:outline-3`}>
				Camera
				<input
					id={id}
					type="file"
					accept="image/jpeg,image/png,image/heic,image/heif"
					capture="environment"
					className="sr-only"
					disabled={sent !== null}
					onChange={(event) => {
						const [file] = event.target.files ?? [];
						event.target.value = '';
						if (file) void take(file);
					}}
				/>
			</label>
			{sent && <Progress doing="Sending the photo" done={sent.done} of={sent.of} />}
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
