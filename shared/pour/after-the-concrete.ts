import type { Characteristic } from '../tolerance/sheet-schema.ts';
import type { HoldPointKind } from './pour-life.ts';

/** What is set into the form and stands there before the concrete: fastenings, embeds, plates, reinforcement (IFC classes, all schemas). */
const setIntoTheForm: ReadonlySet<string> = new Set([
	'IfcFastener',
	'IfcMechanicalFastener',
	'IfcDiscreteAccessory',
	'IfcElementComponent',
	'IfcPlate',
	'IfcPlateStandardCase',
	'IfcReinforcingElement',
	'IfcReinforcingBar',
	'IfcReinforcingMesh',
	'IfcTendon',
	'IfcTendonAnchor',
	'IfcTendonConduit',
]);

interface PlacedPoint {
	readonly characteristic: Characteristic;
	/** Seen from below: the form carries it, so it is there before the concrete. */
	readonly isSoffit: boolean;
	/** IFC class of its element. */
	readonly elementClass: string;
}

/**
 * True of a point that the concrete itself makes: an upward level of a concrete element. Before the pour nothing stands there that could be
 * measured, so that hold point does not ask for it; the one after the pour does. Common practice.
 */
export function isAfterTheConcrete(point: PlacedPoint, holdPoint: HoldPointKind): boolean {
	return holdPoint === 'before-pour' && point.characteristic === 'level' && !point.isSoffit && !setIntoTheForm.has(point.elementClass);
}
