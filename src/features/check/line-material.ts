import { ShaderMaterial, Vector2, Vector3 } from 'three';
import { liftOff } from './glyph-material.ts';

/** Width of a deviation's line, CSS pixels. */
const widthPx = 2.4;

/**
 * Lines of one width on the screen, from a place along its shift, so many times over. Each is a quad turned to the eye: a line of
 * WebGL's own is one pixel wide everywhere.
 */
export function lineMaterial(): ShaderMaterial {
	return new ShaderMaterial({
		depthWrite: false,
		uniforms: {
			uTimes: { value: 1 },
			uPicturePx: { value: new Vector2(1, 1) },
			uLiftM: { value: 0.05 },
			uProud: { value: new Vector3() },
			uShy: { value: new Vector3() },
			uClose: { value: new Vector3() },
		},
		vertexShader: /* glsl */ `
			attribute vec3 aPlace;
			attribute vec3 aShift;
			attribute float aKind;
			uniform float uTimes;
			attribute vec3 aNormal;
			uniform float uLiftM;
			uniform vec2 uPicturePx;
			uniform vec3 uProud;
			uniform vec3 uShy;
			uniform vec3 uClose;
			varying vec3 vColour;
			void main() {
				vColour = aKind == 2.0 ? uShy : aKind == 4.0 ? uClose : uProud;
				vec4 from = modelViewMatrix * vec4(aPlace, 1.0);
				vec4 to = modelViewMatrix * vec4(aPlace + aShift * uTimes, 1.0);
				float lift = ${liftOff};
			from.z += lift;
				to.z += lift;
				from = projectionMatrix * from;
				to = projectionMatrix * to;
				vec2 along = (to.xy / to.w - from.xy / from.w) * uPicturePx;
				float seenPx = length(along);
				vec2 across = seenPx > 0.0 ? vec2(-along.y, along.x) / seenPx : vec2(0.0);
				gl_Position = mix(from, to, position.x);
				gl_Position.xy += across * position.y * ${widthPx.toFixed(1)} / uPicturePx * gl_Position.w;
			}
		`,
		fragmentShader: 'varying vec3 vColour; void main() { gl_FragColor = vec4(vColour, 1.0); }',
	});
}
