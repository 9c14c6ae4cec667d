/** What people on a site call the elements of an IFC class, in the plural. */
export const pluralByClass: Readonly<Record<string, string>> = {
	IfcBeam: 'Beams',
	IfcBuildingElementProxy: 'Other elements',
	IfcColumn: 'Columns',
	IfcCurtainWall: 'Curtain walls',
	IfcDiscreteAccessory: 'Embedded parts',
	IfcDoor: 'Doors',
	IfcElementAssembly: 'Assemblies',
	IfcFastener: 'Fasteners',
	IfcFooting: 'Footings',
	IfcMechanicalFastener: 'Anchor bolts',
	IfcMember: 'Members',
	IfcOpeningElement: 'Openings',
	IfcPile: 'Piles',
	IfcPlate: 'Plates',
	IfcRailing: 'Railings',
	IfcRamp: 'Ramps',
	IfcReinforcingBar: 'Bars',
	IfcRoof: 'Roofs',
	IfcSlab: 'Slabs',
	IfcStair: 'Stairs',
	IfcStairFlight: 'Flights',
	IfcTendon: 'Tendons',
	IfcWall: 'Walls',
	IfcWallStandardCase: 'Walls',
	IfcWindow: 'Windows',
};

const pluralByKey = new Map(Object.entries(pluralByClass).map(([className, plural]) => [className.toLowerCase(), plural]));

/** "IfcColumn" → "Columns"; a class without a word of its own stays as written. */
export function classInWords(className: string): string {
	return pluralByKey.get(className.toLowerCase()) ?? className;
}
