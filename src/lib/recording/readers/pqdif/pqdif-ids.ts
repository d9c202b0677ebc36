/**
 * Identifiers of IEEE Std 1159.3 (power quality data interchange format), as its published definition headers give them
 * (version 1.5 of 2002, checked against 1.7). Written without dashes, in capitals.
 */
const family = {
	base: 'F1C311CF9D890080C72E70A3',
	source: 'F5F511CF9D890080C72E70A3',
	quantity: 'F75311CF9D890080C72E70A3',
	time: 'F75511CF9D890080C72E70A3',
	instance: 'F76E11CF9D890080C72E70A3',
	setting: 'F9C411CF9D890080C72E70A3',
	characteristic: 'B45111D1AE170060083A2628'
};

export const SIGNATURE = '4A111440E49F11CF9900505144494600';

export const RECORD = {
	container: `89738606${family.base}`,
	dataSource: `89738619${family.base}`,
	monitorSettings: `B48D858C${family.source}`,
	observation: `8973861A${family.base}`
} as const;

export const TAG = {
	versionInfo: `89738607${family.base}`,
	compressionStyle: `8973861B${family.base}`,
	compressionAlgorithm: `8973861C${family.base}`,
	title: `8973860D${family.base}`,

	nameOfSource: `B48D8587${family.source}`,
	locationOfSource: `B48D8589${family.source}`,
	timeZoneOfSource: `B48D858A${family.source}`,
	serialNumberOfSource: `B48D8585${family.source}`,
	instrumentModelName: `3D786F83${family.instance}`,
	channelDefinitions: `B48D858D${family.source}`,
	oneChannelDefinition: `B48D858E${family.source}`,
	channelName: `B48D8590${family.source}`,
	phase: `B48D8591${family.source}`,
	quantityType: `B48D8592${family.source}`,
	quantityMeasured: `C690E872${family.time}`,
	seriesDefinitions: `B48D8598${family.source}`,
	oneSeriesDefinition: `B48D859A${family.source}`,
	quantityUnits: `B48D859B${family.source}`,
	valueType: `B48D859C${family.source}`,
	storageMethod: `B48D85A1${family.source}`,
	quantityCharacteristic: `3D786F9E${family.instance}`,

	useCalibration: `62F28180${family.setting}`,
	useTransducer: `62F28181${family.setting}`,
	channelSettings: `62F28182${family.setting}`,
	oneChannelSetting: `3D786F9A${family.instance}`,
	nominalFrequency: '0FA118C3CB4A11D2B30BFE25CB9A1760',
	fullScale: `3D786F87${family.instance}`,
	systemSideRatio: `62F2818A${family.setting}`,
	monitorSideRatio: `62F2818B${family.setting}`,
	calibrationOffset: `62F2818E${family.setting}`,
	calibrationRatio: `62F2818F${family.setting}`,

	observationName: `3D786F8A${family.instance}`,
	timeCreate: `3D786F8B${family.instance}`,
	timeStart: `3D786F8C${family.instance}`,
	triggerMethod: `3D786F8D${family.instance}`,
	timeTriggered: `3D786F8E${family.instance}`,
	channelInstances: `3D786F91${family.instance}`,
	oneChannelInstance: `3D786F92${family.instance}`,
	channelDefinitionIndex: `B48D858F${family.source}`,
	channelFrequency: '2747D4422BD011D2AE420060083A2628',
	channelGroup: 'F90DE218E67B4CF1A295B021A2D46767',
	seriesInstances: `3D786F93${family.instance}`,
	oneSeriesInstance: `3D786F94${family.instance}`,
	seriesScale: `3D786F96${family.instance}`,
	seriesOffset: `3D786F97${family.instance}`,
	seriesValues: `3D786F99${family.instance}`,
	sharedChannelIndex: `8973861F${family.base}`,
	sharedSeriesIndex: `89738620${family.base}`
} as const;

export const QUANTITY_TYPE = {
	waveform: `67F6AF80${family.quantity}`,
	phasor: `67F6AF81${family.quantity}`,
	valueLog: `67F6AF82${family.quantity}`
} as const;

export const VALUE_TYPE = {
	value: `67F6AF97${family.quantity}`,
	minimum: `67F6AF98${family.quantity}`,
	maximum: `67F6AF99${family.quantity}`,
	average: `67F6AF9A${family.quantity}`,
	instantaneous: `67F6AF9B${family.quantity}`,
	rms: 'ABAAAA346E0849AEB522188CDF6A594C',
	status: 'B82B5C8255C711D5A4B3444553540000',
	time: `C690E862${family.time}`,
	angle: `3D786F9D${family.instance}`,
	angleMinimum: 'DC7623403C5611D2AE440060083A2628',
	angleMaximum: 'DC7623413C5611D2AE440060083A2628',
	angleAverage: 'DC7623423C5611D2AE440060083A2628'
} as const;

export const CHARACTERISTIC = {
	none: `A6B31ADF${family.characteristic}`,
	instantaneous: `A6B31ADD${family.characteristic}`,
	rms: `A6B31AE5${family.characteristic}`,
	spectra: `A6B31AE9${family.characteristic}`,
	harmonicGroup: '53BE6BA80789455B9A95DA128683DDA7',
	interharmonicGroup: '5E51E0069C954C5E878F7CA87C0D2A0E',
	thd: `A6B31AEC${family.characteristic}`,
	thdOfRms: 'F3D216E02AA511D5A4B3444553540000',
	tdd: 'F3D216E72AA511D5A4B3444553540000',
	frequency: '07EF68AF9FF511D2B30B006008B37183',
	harmonicRms: `A6B31ADC${family.characteristic}`,
	flickerShortTerm: '515BF32071CA11D4A4B3444553540000',
	flickerLongTerm: '515BF32171CA11D4A4B3444553540000',
	negativeSequenceShare: `A6B31AE8${family.characteristic}`,
	zeroSequenceShare: `A6B31AE7${family.characteristic}`,
	averageImbalance: `A6B31AD1${family.characteristic}`,
	activePower: `A6B31AE1${family.characteristic}`,
	reactivePower: `A6B31AE4${family.characteristic}`,
	apparentPower: `A6B31AE6${family.characteristic}`,
	powerFactor: `A6B31AE3${family.characteristic}`,
	crestFactor: `A6B31AD2${family.characteristic}`,
	kFactor: '8786CA11911311D3B9300050DA2B1F4D',
	flagging: '2A310A593CF54BC6B1B42602005C00C2',
	flaggingOf61000_4_30: '5FD423AADE444A13BF5BAF9621BC6FFA'
} as const;

/** What people call a characteristic that is not tabulated here. */
export const CHARACTERISTIC_NAMES: Record<string, string> = {
	[CHARACTERISTIC.interharmonicGroup]: 'interharmonic groups',
	[CHARACTERISTIC.thdOfRms]: 'THD in percent of the rms',
	[CHARACTERISTIC.tdd]: 'TDD',
	[CHARACTERISTIC.harmonicRms]: 'rms of all harmonics',
	[CHARACTERISTIC.flickerShortTerm]: 'flicker Pst',
	[CHARACTERISTIC.flickerLongTerm]: 'flicker Plt',
	[CHARACTERISTIC.negativeSequenceShare]: 'negative-sequence unbalance',
	[CHARACTERISTIC.zeroSequenceShare]: 'zero-sequence unbalance',
	[CHARACTERISTIC.averageImbalance]: 'unbalance',
	[CHARACTERISTIC.activePower]: 'active power',
	[CHARACTERISTIC.reactivePower]: 'reactive power',
	[CHARACTERISTIC.apparentPower]: 'apparent power',
	[CHARACTERISTIC.powerFactor]: 'power factor',
	[CHARACTERISTIC.crestFactor]: 'crest factor',
	[CHARACTERISTIC.kFactor]: 'K-factor'
};

export const ELEMENT = { collection: 1, scalar: 2, vector: 3 } as const;

export const PHYSICAL_TYPE = {
	boolean1: 1,
	boolean2: 2,
	boolean4: 3,
	char1: 10,
	char2: 11,
	int1: 20,
	int2: 21,
	int4: 22,
	uint1: 30,
	uint2: 31,
	uint4: 32,
	real4: 40,
	real8: 41,
	complex8: 42,
	complex16: 43,
	timestamp: 50,
	guid: 60
} as const;

/** Bytes of one value of each physical type. */
export const TYPE_BYTES: Record<number, number> = {
	1: 1,
	2: 2,
	3: 4,
	10: 1,
	11: 2,
	20: 1,
	21: 2,
	22: 4,
	30: 1,
	31: 2,
	32: 4,
	40: 4,
	41: 8,
	42: 8,
	43: 16,
	50: 12,
	60: 16
};

export const UNIT = {
	none: 0,
	timestamp: 1,
	seconds: 2,
	cycles: 3,
	volts: 6,
	amperes: 7,
	hertz: 15,
	percent: 19,
	perUnit: 20
} as const;

export const STORAGE = { values: 1, scaled: 2, increment: 4 } as const;
export const COMPRESSION_STYLE = { none: 0, wholeFile: 1, perRecord: 2 } as const;
export const COMPRESSION_ALGORITHM = { none: 0, zlib: 1 } as const;
export const MEASURED = { voltage: 1, current: 2 } as const;

/** Days from the standard's day 0 to 1970-01-01 (its header's own helper constant). */
export const DAYS_TO_1970 = 25_569;
