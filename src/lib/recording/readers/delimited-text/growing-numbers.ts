/** Numbers appended one by one; the room doubles when it is full. */
export class GrowingNumbers {
	private room = new Float64Array(1024);
	private count = 0;

	push(value: number): void {
		if (this.count === this.room.length) {
			const wider = new Float64Array(this.room.length * 2);
			wider.set(this.room);
			this.room = wider;
		}
		this.room[this.count++] = value;
	}

	cutTo(count: number): void {
		if (count < this.count) this.count = count;
	}

	/** The numbers in an array of exactly their length. */
	toArray(): Float64Array {
		return this.room.slice(0, this.count);
	}
}
