import { useQuery } from '@tanstack/react-query';
import { type RefObject, useCallback, useEffect, useImperativeHandle, useMemo, useRef, useState } from 'react';
import { Raycaster, Vector2, Vector3 } from 'three';
import type { RevisionDetail } from '#shared/model/contract.ts';
import { DeviationLayer } from '#src/features/check/deviation-layer.tsx';
import { type DeviationMark, nearestMark } from '#src/features/check/deviation-mark.ts';
import { type DrawnAxis, frameAnchors, withBubbles } from '#src/features/model/grid-frame.ts';
import { GridLayer } from '#src/features/model/grid-layer.tsx';
import { ModelLayer } from '#src/features/model/model-layer.tsx';
import { type ModelPicture, readPicture } from '#src/features/model/read-picture.ts';
import { api } from '#src/lib/api.ts';
import { useSceneColours } from '#src/ui/scene-colours.ts';
import { Stage, type StagePress } from '#src/ui/stage.tsx';
import type { StageAnchor } from '#src/ui/stage-anchor.ts';
import type { ViewBox, ViewCommands } from '#src/ui/view-commands.ts';

/** A face under a press: design frame, metres, the normal toward the eye. */
export interface PickedOnModel {
	readonly entityNumber: number;
	readonly place: readonly [number, number, number];
	readonly normal: readonly [number, number, number];
}

interface RevisionSceneProps {
	siteId: string;
	revisionId: string;
	label: string;
	box: ViewBox;
	axes: readonly DrawnAxis[];
	storeys: RevisionDetail['reading']['storeys'];
	marks: readonly DeviationMark[];
	chosenId: string | null;
	chosenEntity: number | null;
	hidden: ReadonlySet<number>;
	/** A press picks the face and no mark. */
	isPlacing: boolean;
	note: string;
	commands: RefObject<ViewCommands | null>;
	onChoose: (checkpointId: string) => void;
	onPick: (picked: PickedOnModel) => void;
	onReady: () => void;
	onFailed: (why: string) => void;
}

/** A revision in 3D: model, grid, checkpoints. With three.js in it, so it is loaded when it is first asked for. */
export default function RevisionScene(props: RevisionSceneProps) {
	const { siteId, revisionId, onReady, onFailed } = props;
	const file = useQuery({
		...api.model.picture.queryOptions({ input: { siteId, revisionId } }),
		staleTime: Number.POSITIVE_INFINITY,
		gcTime: 60_000,
	});
	const [picture, setPicture] = useState<ModelPicture | null>(null);
	useEffect(() => {
		if (file.error) onFailed('This revision has no picture that can be had now. The plan takes its place.');
	}, [file.error, onFailed]);
	useEffect(() => {
		const blob = file.data;
		if (blob === undefined) return;
		let isWanted = true;
		let made: ModelPicture | null = null;
		blob
			.arrayBuffer()
			.then(readPicture)
			.then((read) => {
				if (!isWanted) return read.dispose();
				made = read;
				setPicture(read);
				onReady();
			})
			.catch((error: unknown) => {
				console.error(error);
				if (isWanted) onFailed('The model’s picture cannot be read by this browser. The plan takes its place.');
			});
		return () => {
			isWanted = false;
			made?.dispose();
		};
	}, [file.data, onReady, onFailed]);
	return picture && <Scene {...props} picture={picture} />;
}

function Scene({
	picture,
	label,
	box,
	axes,
	storeys,
	marks,
	chosenId,
	chosenEntity,
	hidden,
	isPlacing,
	note,
	commands,
	onChoose,
	onPick,
	onFailed,
}: RevisionSceneProps & { picture: ModelPicture }) {
	const colours = useSceneColours();
	const { originM } = picture;
	const sceneCommands = useRef<ViewCommands | null>(null);
	const local = useCallback(
		(place: readonly [number, number, number]): [number, number, number] => [
			place[0] - originM[0],
			place[1] - originM[1],
			place[2] - originM[2],
		],
		[originM],
	);
	useImperativeHandle(
		commands,
		() => ({
			frame: (asked) => sceneCommands.current?.frame({ min: local(asked.min), max: local(asked.max) }),
			whole: () => sceneCommands.current?.whole(),
		}),
		[local],
	);
	const chosen = marks.find((mark) => mark.checkpointId === chosenId);
	const anchors = useMemo((): StageAnchor[] => {
		const frame = frameAnchors(axes, storeys, box, originM);
		return chosen === undefined ? frame : [...frame, { key: 'chosen', kind: 'ring', place: local(chosen.place), text: '' }];
	}, [axes, storeys, box, originM, chosen, local]);
	const bounds = useMemo(() => {
		const whole = withBubbles(box, axes);
		return { min: local(whole.min), max: local(whole.max) };
	}, [box, axes, local]);
	const press = useCallback(
		({ x, y, width, height, isCoarse, camera }: StagePress) => {
			if (!isPlacing) {
				const seen = new Vector3();
				const placesPx = marks.flatMap(({ place }) => {
					seen.set(...local(place)).project(camera);
					return [((seen.x + 1) / 2) * width, ((1 - seen.y) / 2) * height];
				});
				const near = nearestMark(Float32Array.from(placesPx), x, y, isCoarse ? 26 : 14);
				if (near !== null) return onChoose(marks[near]!.checkpointId);
			}
			const rays = new Raycaster();
			rays.setFromCamera(new Vector2((x / width) * 2 - 1, 1 - (y / height) * 2), camera);
			const picked = faceUnder(picture, rays, hidden);
			if (picked !== null) onPick(picked);
		},
		[isPlacing, marks, local, picture, hidden, onChoose, onPick],
	);
	const lost = useCallback(() => onFailed('The device took the graphics away, so the plan takes the model’s place.'), [onFailed]);
	return (
		<Stage label={label} bounds={bounds} anchors={anchors} commands={sceneCommands} onPress={press} onLost={lost} note={note}>
			<GridLayer axes={axes} floorM={box.min[2]} originM={originM} colours={colours} />
			<ModelLayer picture={picture} colours={colours} hidden={hidden} chosen={chosenEntity} />
			<DeviationLayer marks={marks} chosenId={chosenId} originM={originM} times={1} colours={colours} />
		</Stage>
	);
}

/** The nearest drawn face under a ray. */
function faceUnder({ parts, entityNumbers, originM }: ModelPicture, { ray }: Raycaster, hidden: ReadonlySet<number>): PickedOnModel | null {
	let nearest: { entityNumber: number; distanceM: number; normal: readonly [number, number, number] } | null = null;
	for (const part of parts) {
		for (const { element, distanceM, normal } of part.under(ray)) {
			const entityNumber = entityNumbers[element];
			if (entityNumber === undefined || hidden.has(entityNumber)) continue;
			if (nearest === null || distanceM < nearest.distanceM) nearest = { entityNumber, distanceM, normal };
			break;
		}
	}
	if (nearest === null) return null;
	const at = ray.at(nearest.distanceM, new Vector3());
	return {
		entityNumber: nearest.entityNumber,
		place: [at.x + originM[0], at.y + originM[1], at.z + originM[2]],
		normal: nearest.normal,
	};
}
