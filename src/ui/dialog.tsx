import { type ReactNode, useEffect, useId, useRef } from 'react';

interface DialogProps {
	isOpen: boolean;
	/** Escape, the press beside it, "Close". */
	onClose: () => void;
	title: string;
	children: ReactNode;
	/** Buttons at its foot, the act last. */
	acts?: ReactNode;
}

/** A native modal dialog: the focus stays within and comes back, Escape closes. Only where what lies behind must wait. */
export function Dialog({ isOpen, onClose, title, children, acts }: DialogProps) {
	const box = useRef<HTMLDialogElement>(null);
	const titleId = useId();
	useEffect(() => {
		const dialog = box.current;
		if (!dialog) return;
		if (isOpen && !dialog.open) dialog.showModal();
		if (!isOpen && dialog.open) dialog.close();
	}, [isOpen]);
	return (
		<dialog
			ref={box}
			aria-labelledby={titleId}
			onClose={onClose}
			className="m-auto w-[min(40rem,calc(100vw-2rem))] rounded-corner border border-rule bg-sheet p-0 text-ink shadow-lift backdrop:bg-ink/40"
		>
			{isOpen && (
				<div className="px-5 py-4.5">
					<div className="mb-3 flex items-start gap-4">
						<h2 id={titleId} className="m-0 flex-1 text-h2 leading-snug font-strong">
							{title}
						</h2>
						<button
							type="button"
							onClick={onClose}
							className="min-h-9 rounded-corner px-2 text-action underline underline-offset-3 pointer-coarse:min-h-12"
						>
							Close
						</button>
					</div>
					{children}
					{acts && <div className="mt-5 flex flex-wrap justify-end gap-2.5">{acts}</div>}
				</div>
			)}
		</dialog>
	);
}
