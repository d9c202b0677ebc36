import type { CaptureCheck } from './capture-check';
import type { CaptureSubject, CheckedPoint } from './capture-subject';
import { checkCalibration } from './calibration-check';
import { checkClock } from './clock-check';
import { checkFloors } from './floor-check';
import { checkLoad } from './load-check';
import { signalChecks } from './signal-checks';
import { trendChecks, trendRemarks } from './trend-checks';

/** Every check of one analysed capture, in the order in which an engineer would look. */
export function checkCapture(subject: CaptureSubject, point: CheckedPoint): CaptureCheck[] {
	const remarks = [...subject.remarks, ...trendRemarks(subject, point)];
	return [
		...signalChecks({ ...subject, remarks }, point),
		...trendChecks(subject, point),
		checkLoad(subject, point),
		...checkFloors(subject, point),
		...checkClock(subject, point),
		checkCalibration(subject, point)
	];
}
