import type { Phase } from '../../phase';
import { phaseHints } from '../../phase-hint';
import type { ChannelQuantity, RecordingChannel } from '../../recording';
import type { ChannelDefinition, MonitorSettings } from './definitions';
import { MEASURED, UNIT } from './pqdif-ids';

/** Conductors by the standard's own numbers; those from 8 on mean sums, averages and the like. */
const PHASES: Record<number, Phase> = {
	1: 'L1',
	2: 'L2',
	3: 'L3',
	4: 'N',
	5: 'L1L2',
	6: 'L2L3',
	7: 'L3L1'
};
const RESIDUAL = 8;
const FIRST_GENERAL = 19;

/** The conductor by the phase number; by the name only where the number names none. */
export function phaseOf({ phase, name, measured }: ChannelDefinition): Phase | null {
	const stated = PHASES[phase];
	if (stated !== undefined) return stated;
	if (phase === RESIDUAL) return measured === MEASURED.current ? 'N' : null;
	if (phase !== 0 && phase < FIRST_GENERAL) return null;
	return phaseHints([{ field: '', name }])[0] ?? null;
}

export function quantityOf(measured: number, units: number): ChannelQuantity {
	if (units === UNIT.volts) return 'voltage';
	if (units === UNIT.amperes) return 'current';
	if (measured === MEASURED.voltage) return 'voltage';
	return measured === MEASURED.current ? 'current' : 'other';
}

/** What the settings say of a channel's side, its ratio and its calibration. */
export interface ChannelScale extends Pick<RecordingChannel, 'valuesAre' | 'ratio'> {
	/** Values are multiplied by this, then `offset` is added. */
	factor: number;
	offset: number;
}

/**
 * Where the settings demand the transducer's ratio, the values stand on the monitor's side and the ratio takes them to the
 * system's; where they only state one, it has been applied.
 */
export function scaleOf(settings: MonitorSettings, definitionIndex: number): ChannelScale {
	const own = settings.channels.get(definitionIndex);
	const ratio = own?.ratio ? { primary: own.ratio.system, secondary: own.ratio.monitor } : null;
	const isCalibrated = settings.useCalibration && own !== undefined;
	return {
		valuesAre: settings.useTransducer ? 'secondary' : ratio === null ? 'unknown' : 'primary',
		ratio,
		factor: isCalibrated ? own.calibration.ratio : 1,
		offset: isCalibrated ? own.calibration.offset : 0
	};
}
