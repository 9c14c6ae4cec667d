import { useFrame, useThree } from '@react-three/fiber';
import { useEffect, useLayoutEffect, useMemo } from 'react';
import {
	BufferGeometry,
	Float32BufferAttribute,
	InstancedBufferAttribute,
	InstancedBufferGeometry,
	type ShaderMaterial,
	type Vector2,
	type Vector3,
} from 'three';
import type { SceneColours } from '#src/ui/scene-colours.ts';
import { type DeviationMark, hasLine, ringRadiusPx } from './deviation-mark.ts';
import { colourGlyphs, glyphMaterial, glyphNumber } from './glyph-material.ts';
import { lineMaterial } from './line-material.ts';

interface DeviationLayerProps {
	/** Those that are shown, in drawing order. */
	marks: readonly DeviationMark[];
	/** Drawn over everything. */
	chosenId: string | null;
	originM: readonly [number, number, number];
	/** Lines are drawn so many times as long as the deviation. */
	times: number;
	colours: SceneColours;
}

/** How far a glyph is lifted off its face for the eye, pixels of the present scale and metres at most. */
const liftPx = 4;
const mostLiftM = 0.1;

function glyphGeometry(marks: readonly DeviationMark[], originM: readonly [number, number, number]): BufferGeometry {
	const places = new Float32Array(3 * marks.length);
	const shifts = new Float32Array(3 * marks.length);
	const normals = new Float32Array(3 * marks.length);
	const kinds = new Float32Array(marks.length);
	marks.forEach((mark, i) => {
		kinds[i] = glyphNumber[mark.kind];
		for (let axis = 0; axis < 3; axis++) {
			places[3 * i + axis] = mark.place[axis]! - originM[axis]!;
			shifts[3 * i + axis] = mark.shiftM?.[axis] ?? 0;
			normals[3 * i + axis] = mark.normal?.[axis] ?? 0;
		}
	});
	return new BufferGeometry()
		.setAttribute('position', new Float32BufferAttribute(places, 3))
		.setAttribute('aShift', new Float32BufferAttribute(shifts, 3))
		.setAttribute('aNormal', new Float32BufferAttribute(normals, 3))
		.setAttribute('aKind', new Float32BufferAttribute(kinds, 1));
}

function lineGeometry(marks: readonly DeviationMark[], originM: readonly [number, number, number]): InstancedBufferGeometry {
	const lined = marks.filter(hasLine);
	const geometry = new InstancedBufferGeometry();
	geometry.setAttribute('position', new Float32BufferAttribute([0, -1, 0, 1, -1, 0, 1, 1, 0, 0, 1, 0], 3));
	geometry.setIndex([0, 1, 2, 0, 2, 3]);
	const places = lined.flatMap((mark) => [0, 1, 2].map((axis) => mark.place[axis]! - originM[axis]!));
	geometry.setAttribute('aPlace', new InstancedBufferAttribute(new Float32Array(places), 3));
	geometry.setAttribute('aShift', new InstancedBufferAttribute(new Float32Array(lined.flatMap((mark) => [...mark.shiftM!])), 3));
	geometry.setAttribute(
		'aNormal',
		new InstancedBufferAttribute(new Float32Array(lined.flatMap((mark) => [...(mark.normal ?? [0, 0, 0])])), 3),
	);
	geometry.setAttribute('aKind', new InstancedBufferAttribute(new Float32Array(lined.map((mark) => glyphNumber[mark.kind])), 1));
	geometry.instanceCount = lined.length;
	return geometry;
}

/** One glyph a checkpoint, its form drawn in the shader, and a line that shows which way and how far. What a wall hides is drawn faintly. */
export function DeviationLayer({ marks, chosenId, originM, times, colours }: DeviationLayerProps) {
	const invalidate = useThree((state) => state.invalidate);
	const materials = useMemo(
		() => ({ seen: glyphMaterial('seen'), behind: glyphMaterial('behind'), over: glyphMaterial('over'), lines: lineMaterial() }),
		[],
	);
	const glyphs = useMemo(() => glyphGeometry(marks, originM), [marks, originM]);
	const behind = useMemo(() => glyphGeometry(marks.filter(hasLine), originM), [marks, originM]);
	const over = useMemo(
		() =>
			glyphGeometry(
				marks.filter((mark) => mark.checkpointId === chosenId),
				originM,
			),
		[marks, chosenId, originM],
	);
	const lines = useMemo(() => lineGeometry(marks, originM), [marks, originM]);
	useEffect(() => () => glyphs.dispose(), [glyphs]);
	useEffect(() => () => behind.dispose(), [behind]);
	useEffect(() => () => over.dispose(), [over]);
	useEffect(() => () => lines.dispose(), [lines]);
	useEffect(
		() => () => {
			for (const material of Object.values(materials)) material.dispose();
		},
		[materials],
	);
	useLayoutEffect(() => {
		colourGlyphs(materials.seen, colours);
		colourGlyphs(materials.behind, colours);
		colourGlyphs(materials.over, colours);
		const { uniforms } = materials.lines;
		(uniforms.uProud!.value as Vector3).fromArray(colours.set === 'sun' ? colours.ink : colours.proud);
		(uniforms.uShy!.value as Vector3).fromArray(colours.set === 'sun' ? colours.ink : colours.shy);
		(uniforms.uClose!.value as Vector3).fromArray(colours.glyphDiamond);
		invalidate();
	}, [materials, colours, invalidate]);
	useLayoutEffect(() => {
		materials.lines.uniforms.uTimes!.value = times;
		invalidate();
	}, [materials, times, invalidate]);
	// New geometry is no change React Three Fiber sees on a primitive it already draws.
	useLayoutEffect(() => {
		if (glyphs !== null && lines !== null && over !== null) invalidate();
	}, [glyphs, lines, over, invalidate]);
	useFrame(({ gl, size, camera }) => {
		const liftM = Math.min(liftPx / camera.zoom, mostLiftM);
		const all: ShaderMaterial[] = [materials.seen, materials.behind, materials.over, materials.lines];
		for (const { uniforms } of all) {
			uniforms.uLiftM!.value = liftM;
			if (uniforms.uMetresPerPx) uniforms.uMetresPerPx.value = 1 / camera.zoom;
			if (uniforms.uDepthPerM) uniforms.uDepthPerM.value = camera.projectionMatrix.elements[10]! / 2;
			if (uniforms.uRadiusPx) uniforms.uRadiusPx.value = ringRadiusPx(marks.length);
			if (uniforms.uPixelRatio) uniforms.uPixelRatio.value = gl.getPixelRatio();
			if (uniforms.uPicturePx) (uniforms.uPicturePx.value as Vector2).set(size.width, size.height);
		}
	});
	return (
		<>
			<points geometry={behind} material={materials.behind} renderOrder={2} frustumCulled={false} raycast={() => null} />
			<mesh geometry={lines} material={materials.lines} renderOrder={3} frustumCulled={false} raycast={() => null} />
			<points geometry={glyphs} material={materials.seen} renderOrder={4} frustumCulled={false} raycast={() => null} />
			<points geometry={over} material={materials.over} renderOrder={5} frustumCulled={false} raycast={() => null} />
		</>
	);
}
