import { DataTexture, DoubleSide, RedFormat, ShaderMaterial, UnsignedByteType, Vector3 } from 'three';
import type { SceneColours } from '#src/ui/scene-colours.ts';

/** How one element is drawn. */
export const elementState = { hidden: 0, plain: 1, chosen: 2 } as const;

const texelsAcross = 1024;

/** One byte an element, read by the shaders: what is put away costs no new geometry. */
export function stateTexture(elementCount: number): DataTexture {
	const rows = Math.max(1, Math.ceil(elementCount / texelsAcross));
	const texture = new DataTexture(
		new Uint8Array(texelsAcross * rows).fill(elementState.plain),
		texelsAcross,
		rows,
		RedFormat,
		UnsignedByteType,
	);
	texture.needsUpdate = true;
	return texture;
}

const readState = /* glsl */ `
	uniform sampler2D uState;
	attribute float _element;
	float stateOf() {
		int number = int(_element + 0.5);
		return floor(texelFetch(uState, ivec2(number % ${texelsAcross}, number / ${texelsAcross}), 0).r * 255.0 + 0.5);
	}
`;

/** Faces: pale and matt, one tone a plane, lit from above and the left as a drawing is. The normal comes from the screen, so the mesh needs none. */
export function faceMaterial(state: DataTexture): ShaderMaterial {
	return new ShaderMaterial({
		uniforms: { uState: { value: state }, uBright: { value: new Vector3() }, uDark: { value: new Vector3() } },
		side: DoubleSide,
		polygonOffset: true,
		polygonOffsetFactor: 1.5,
		polygonOffsetUnits: 2,
		vertexShader: /* glsl */ `
			${readState}
			varying vec3 vPlace;
			void main() {
				vPlace = position;
				gl_Position = stateOf() < 0.5 ? vec4(2.0, 2.0, 2.0, 1.0) : projectionMatrix * modelViewMatrix * vec4(position, 1.0);
			}
		`,
		fragmentShader: /* glsl */ `
			uniform vec3 uBright;
			uniform vec3 uDark;
			varying vec3 vPlace;
			void main() {
				vec3 normal = normalize(cross(dFdx(vPlace), dFdy(vPlace)));
				float light = 0.5 + 0.5 * dot(normal, normalize(vec3(-0.25, -0.45, 0.86)));
				gl_FragColor = vec4(mix(uDark, uBright, smoothstep(0.15, 0.93, light)), 1.0);
			}
		`,
	});
}

/** Edges: thin, in the model's own tone. `chosen`: only those of the chosen element, in ink, through whatever stands before it. */
export function edgeMaterial(state: DataTexture, which: 'all' | 'chosen'): ShaderMaterial {
	return new ShaderMaterial({
		uniforms: { uState: { value: state }, uEdge: { value: new Vector3() } },
		depthTest: which === 'all',
		vertexShader: /* glsl */ `
			${readState}
			void main() {
				gl_Position = stateOf() < ${which === 'all' ? '0.5' : '1.5'} ? vec4(2.0, 2.0, 2.0, 1.0) : projectionMatrix * modelViewMatrix * vec4(position, 1.0);
			}
		`,
		fragmentShader: /* glsl */ `
			uniform vec3 uEdge;
			void main() {
				gl_FragColor = vec4(uEdge, 1.0);
			}
		`,
	});
}

/** Puts a colour set's tones into all three. */
export function colourModel(faces: ShaderMaterial, edges: ShaderMaterial, chosenEdges: ShaderMaterial, colours: SceneColours): void {
	(faces.uniforms.uBright!.value as Vector3).fromArray(colours.modelBright);
	(faces.uniforms.uDark!.value as Vector3).fromArray(colours.modelDark);
	(edges.uniforms.uEdge!.value as Vector3).fromArray(colours.modelEdge);
	(chosenEdges.uniforms.uEdge!.value as Vector3).fromArray(colours.ink);
}
