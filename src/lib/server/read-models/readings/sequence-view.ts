import type { PointContext } from './point-windows';
import type { WindowRows } from './window-rows';

export interface SequenceReadings {
	kind: 'sequence';
}

export function sequenceReadings(_windows: WindowRows, _context: PointContext): SequenceReadings {
	return { kind: 'sequence' };
}
