/** Hands a file to the browser's own download. */
export function saveBlob(blob: Blob, name: string): void {
	const address = URL.createObjectURL(blob);
	const link = document.createElement('a');
	link.href = address;
	link.download = name;
	link.click();
	// The download has begun by the next turn; the bytes are let go after that.
	setTimeout(() => URL.revokeObjectURL(address), 10_000);
}
