import { useThree } from '@react-three/fiber';
import { useEffect, useLayoutEffect, useMemo } from 'react';
import { BufferGeometry, Float32BufferAttribute, ShaderMaterial, Vector3 } from 'three';
import type { SceneColours } from '#src/ui/scene-colours.ts';
import type { DrawnAxis } from './grid-frame.ts';

interface GridLayerProps {
	axes: readonly DrawnAxis[];
	/** Height they are drawn at, design frame, metres. */
	floorM: number;
	originM: readonly [number, number, number];
	colours: SceneColours;
}

/** The grid's axes, thin, at the foot of the work, each out to its bubble. */
export function GridLayer({ axes, floorM, originM, colours }: GridLayerProps) {
	const invalidate = useThree((state) => state.invalidate);
	const geometry = useMemo(() => {
		const ends = axes.flatMap((axis) =>
			[axis.bubble, axis.to].flatMap(([east, north]) => [east - originM[0], north - originM[1], floorM - originM[2]]),
		);
		return new BufferGeometry().setAttribute('position', new Float32BufferAttribute(ends, 3));
	}, [axes, floorM, originM]);
	const material = useMemo(
		() =>
			new ShaderMaterial({
				uniforms: { uColour: { value: new Vector3() } },
				vertexShader: 'void main() { gl_Position = projectionMatrix * modelViewMatrix * vec4(position, 1.0); }',
				fragmentShader: 'uniform vec3 uColour; void main() { gl_FragColor = vec4(uColour, 1.0); }',
			}),
		[],
	);
	useEffect(() => () => geometry.dispose(), [geometry]);
	useEffect(() => () => material.dispose(), [material]);
	useLayoutEffect(() => {
		(material.uniforms.uColour!.value as Vector3).fromArray(colours.rule);
		invalidate();
	}, [material, colours, invalidate]);
	return <lineSegments geometry={geometry} material={material} raycast={() => null} frustumCulled={false} />;
}
