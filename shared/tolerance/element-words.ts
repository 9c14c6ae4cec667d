/** What people on a site call the elements of an IFC class, in the plural. */
const pluralByClass: Readonly<Record<string, string>> = {
	ifcbeam: 'Beams',
	ifcbuildingelementproxy: 'Other elements',
	ifccolumn: 'Columns',
	ifccurtainwall: 'Curtain walls',
	ifcdiscreteaccessory: 'Embedded parts',
	ifcdoor: 'Doors',
	ifcelementassembly: 'Assemblies',
	ifcfastener: 'Fasteners',
	ifcfooting: 'Footings',
	ifcmechanicalfastener: 'Anchor bolts',
	ifcmember: 'Members',
	ifcopeningelement: 'Openings',
	ifcpile: 'Piles',
	ifcplate: 'Plates',
	ifcrailing: 'Railings',
	ifcramp: 'Ramps',
	ifcreinforcingbar: 'Bars',
	ifcroof: 'Roofs',
	ifcslab: 'Slabs',
	ifcstair: 'Stairs',
	ifcstairflight: 'Flights',
	ifctendon: 'Tendons',
	ifcwall: 'Walls',
	ifcwallstandardcase: 'Walls',
	ifcwindow: 'Windows',
};

/** "IfcColumn" → "Columns"; a class without a word of its own stays as written. */
export function classInWords(className: string): string {
	return pluralByClass[className.toLowerCase()] ?? className;
}
