import { ShaderMaterial, Vector3 } from 'three';
import type { GlyphKind } from '#src/ui/glyph-kind.ts';
import type { SceneColours } from '#src/ui/scene-colours.ts';

/** Numbers of the forms in the shader. */
export const glyphNumber: Record<GlyphKind, number> = { within: 0, proud: 1, shy: 2, plan: 3, close: 4, none: 5 };

/** Side of the square a glyph is drawn in, CSS pixels. */
const boxPx = 26;

/**
 * How much nearer to the eye a mark is taken to be: by what its outward normal looks at the eye, so that a face that looks away keeps its
 * marks to itself. Levels and places in plan lie on a plane that looks up.
 */
export const liftOff = 'uLiftM * (dot(aNormal, aNormal) > 0.5 ? (modelViewMatrix * vec4(aNormal, 0.0)).z : 1.0)';

const vertexShader = /* glsl */ `
	attribute float aKind;
	attribute vec3 aShift;
	uniform float uPixelRatio;
	uniform float uLiftM;
	attribute vec3 aNormal;
	varying float vKind;
	varying vec2 vTurn;
	varying vec2 vSlope;
	void main() {
		vKind = aKind;
		// The glyph is flat on the screen, but hides and is hidden as if it lay on its face: how its depth changes across it.
		vec3 normal = (modelViewMatrix * vec4(dot(aNormal, aNormal) > 0.5 ? aNormal : vec3(0.0, 0.0, 1.0), 0.0)).xyz;
		vSlope = -normal.xy / (abs(normal.z) < 0.12 ? (normal.z < 0.0 ? -0.12 : 0.12) : normal.z);
		vec4 seen = modelViewMatrix * vec4(position, 1.0);
		// The way it deviates, as it is seen: the wedge and the arrow turn along it. Seen end on, a height keeps pointing up or down, all else right or left.
		vec2 along = (modelViewMatrix * vec4(aShift, 0.0)).xy;
		float seenLength = length(along);
		float sign_ = aKind == 2.0 ? -1.0 : 1.0;
		vec2 endOn = abs(aShift.z) > 0.9 * length(aShift) ? vec2(0.0, sign_) : vec2(sign_, 0.0);
		vTurn = seenLength > 0.05 * length(aShift) && seenLength > 0.0 ? along / seenLength : endOn;
		seen.z += ${liftOff};
		gl_Position = projectionMatrix * seen;
		gl_PointSize = ${boxPx.toFixed(1)} * uPixelRatio;
	}
`;

/** Distances in CSS pixels, as the forms are drawn in src/ui/glyph.tsx; negative is inside (Quilez, distance functions in 2D). */
const fragmentShader = /* glsl */ `
	uniform float uPixelRatio;
	uniform float uAlpha;
	uniform float uEdgePx;
	uniform float uRingPx;
	uniform vec3 uSheet;
	uniform vec3 uProud;
	uniform vec3 uShy;
	uniform vec3 uClose;
	uniform vec3 uEdge;
	uniform vec3 uRing;
	uniform vec3 uDiamond;
	uniform vec3 uDash;
	uniform float uMetresPerPx;
	uniform float uDepthPerM;
	uniform float uRadiusPx;
	varying float vKind;
	varying vec2 vTurn;
	varying vec2 vSlope;

	float triangle(vec2 p, vec2 a, vec2 b, vec2 c) {
		vec2 ab = b - a, bc = c - b, ca = a - c;
		vec2 pa = p - a, pb = p - b, pc = p - c;
		vec2 qa = pa - ab * clamp(dot(pa, ab) / dot(ab, ab), 0.0, 1.0);
		vec2 qb = pb - bc * clamp(dot(pb, bc) / dot(bc, bc), 0.0, 1.0);
		vec2 qc = pc - ca * clamp(dot(pc, ca) / dot(ca, ca), 0.0, 1.0);
		float turn = sign(ab.x * ca.y - ab.y * ca.x);
		vec2 d = min(min(vec2(dot(qa, qa), turn * (pa.x * ab.y - pa.y * ab.x)), vec2(dot(qb, qb), turn * (pb.x * bc.y - pb.y * bc.x))),
			vec2(dot(qc, qc), turn * (pc.x * ca.y - pc.y * ca.x)));
		return -sqrt(d.x) * sign(d.y);
	}
	float box(vec2 p, vec2 middle, vec2 half_) {
		vec2 d = abs(p - middle) - half_;
		return length(max(d, 0.0)) + min(max(d.x, d.y), 0.0);
	}
	float cover(float distance_) {
		return clamp(0.5 - distance_ * uPixelRatio, 0.0, 1.0);
	}
	void main() {
		vec2 q = (gl_PointCoord - 0.5) * ${boxPx.toFixed(1)};
		q.y = -q.y;
		vec2 p = vec2(dot(q, vTurn), dot(q, vec2(-vTurn.y, vTurn.x)));
		vec3 fill = uSheet;
		vec3 line = uEdge;
		float body;
		float width = uEdgePx;
		if (vKind < 0.5) {
			body = length(q) - uRadiusPx;
			line = uRing;
			width = uRingPx * min(1.0, 0.4 + 0.18 * uRadiusPx);
		} else if (vKind < 2.5) {
			body = triangle(p, vec2(-5.6, 7.0), vec2(7.0, 0.0), vec2(-5.6, -7.0));
			fill = vKind < 1.5 ? uProud : uShy;
		} else if (vKind < 3.5) {
			body = min(triangle(p, vec2(0.0, 6.5), vec2(8.5, 0.0), vec2(0.0, -6.5)), box(p, vec2(-4.0, 0.0), vec2(4.2, 2.2)));
			fill = uProud;
		} else if (vKind < 4.5) {
			body = (abs(q.x) + abs(q.y) - 6.6) * 0.70711;
			fill = q.x < 0.0 ? uClose : uSheet;
			line = uDiamond;
			width = 1.8;
		} else {
			body = length(vec2(max(abs(q.x) - 5.0, 0.0), q.y)) - 1.4;
			fill = uDash;
			line = uSheet;
			width = 0.8;
		}
		float outer = cover(body - width * 0.5);
		float inner = cover(body + width * 0.5);
		float alpha = outer * uAlpha;
		if (alpha < 0.02) discard;
		gl_FragDepth = gl_FragCoord.z + dot(vSlope, q) * uMetresPerPx * uDepthPerM;
		gl_FragColor = vec4(mix(line, fill, inner), alpha);
	}
`;

/** One material for all glyphs: the form is drawn in the fragment shader. `behind`: the faint pass for what a wall hides; `over`: the chosen one, never hidden. */
export function glyphMaterial(pass: 'seen' | 'behind' | 'over'): ShaderMaterial {
	const colour = () => ({ value: new Vector3() });
	return new ShaderMaterial({
		transparent: true,
		depthTest: pass === 'seen',
		depthWrite: false,
		uniforms: {
			uPixelRatio: { value: 1 },
			uLiftM: { value: 0.05 },
			uMetresPerPx: { value: 0.05 },
			uDepthPerM: { value: 0 },
			uRadiusPx: { value: 3.3 },
			uAlpha: { value: pass === 'behind' ? 0.3 : 1 },
			uEdgePx: { value: 1 },
			uRingPx: { value: 2 },
			uSheet: colour(),
			uProud: colour(),
			uShy: colour(),
			uClose: colour(),
			uEdge: colour(),
			uRing: colour(),
			uDiamond: colour(),
			uDash: colour(),
		},
		vertexShader,
		fragmentShader,
	});
}

/** Puts a colour set into a glyph material. */
export function colourGlyphs({ uniforms }: ShaderMaterial, colours: SceneColours): void {
	const put = (name: string, rgb: readonly [number, number, number]) => (uniforms[name]!.value as Vector3).fromArray(rgb);
	put('uSheet', colours.sheet);
	put('uProud', colours.proud);
	put('uShy', colours.shy);
	put('uClose', colours.close);
	put('uEdge', colours.glyphEdge);
	put('uRing', colours.glyphRing);
	put('uDiamond', colours.glyphDiamond);
	put('uDash', colours.glyphDash);
	uniforms.uEdgePx!.value = colours.glyphEdgePx;
	uniforms.uRingPx!.value = colours.glyphRingPx;
}
