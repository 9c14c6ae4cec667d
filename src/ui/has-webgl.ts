/** Whether this browser gives a WebGL 2 drawing. Asked before the 3D view is loaded, because a canvas that fails later leaves a hole in the page. */
export function hasWebGl2(): boolean {
	try {
		const gl = document.createElement('canvas').getContext('webgl2');
		if (gl === null) return false;
		// Browsers keep few contexts at a time: give this one back.
		gl.getExtension('WEBGL_lose_context')?.loseContext();
		return true;
	} catch {
		return false;
	}
}
