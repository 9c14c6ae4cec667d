/** Only addresses of this program: "//elsewhere" and "https:…" lead out of it. */
export function backOf(asked: string | null): string {
	return asked?.startsWith('/') && !asked.startsWith('//') && !asked.startsWith('/\\') && !asked.startsWith('/sign-in') ? asked : '/sites';
}
