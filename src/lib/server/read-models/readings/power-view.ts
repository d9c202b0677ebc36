import type { PointContext } from './point-windows';
import type { WindowRows } from './window-rows';

export interface PowerReadings {
	kind: 'power';
}

export function powerReadings(_windows: WindowRows, _context: PointContext): PowerReadings {
	return { kind: 'power' };
}
