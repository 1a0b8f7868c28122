/** Whole numbers, as many as come. */
export class GrowingIntegers {
  #values = new Int32Array(1024);
  #length = 0;

  get length(): number {
    return this.#length;
  }

  push(value: number): void {
    if (this.#length === this.#values.length) this.#grow();
    this.#values[this.#length++] = value;
  }

  at(index: number): number {
    return this.#values[index];
  }

  set(index: number, value: number): void {
    this.#values[index] = value;
  }

  /** A view of all of them; not to be kept. */
  get values(): Int32Array {
    return this.#values.subarray(0, this.#length);
  }

  #grow(): void {
    const values = new Int32Array(2 * this.#values.length);
    values.set(this.#values);
    this.#values = values;
  }
}

/** Numbers, as many as come. */
export class GrowingDoubles {
  #values = new Float64Array(1024);
  #length = 0;

  push(value: number): void {
    if (this.#length === this.#values.length) {
      const values = new Float64Array(2 * this.#values.length);
      values.set(this.#values);
      this.#values = values;
    }
    this.#values[this.#length++] = value;
  }

  at(index: number): number {
    return this.#values[index];
  }

  get values(): Float64Array {
    return this.#values.subarray(0, this.#length);
  }
}
