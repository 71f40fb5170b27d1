/** A field of what somebody sent that is missing or not what it has to be. */
export class UnreadableField extends Error {
  constructor(
    /** Where it is, such as `technicians[2].shifts[0].end`; empty for the whole. */
    readonly path: string,
    readonly trouble: string,
  ) {
    super(path === '' ? trouble : `${path}: ${trouble}`);
  }
}

/** One value that was sent, and where it was. */
export class Field {
  constructor(
    readonly value: unknown,
    readonly path = '',
  ) {}

  /** A field of this object; it may be missing, which the next question then says. */
  at(name: string): Field {
    const fields = this.object();
    const path = this.path === '' ? name : `${this.path}.${name}`;
    return new Field(Object.hasOwn(fields, name) ? fields[name] : undefined, path);
  }

  /** What `read` makes of the field, or undefined when it is left out or null. */
  optional<Value>(read: (field: Field) => Value): Value | undefined {
    return this.value === undefined || this.value === null ? undefined : read(this);
  }

  object(): Readonly<Record<string, unknown>> {
    const { value } = this;
    if (typeof value !== 'object' || value === null || Array.isArray(value)) {
      this.refuse('must be an object');
    }
    return value as Record<string, unknown>;
  }

  list<Value>(read: (field: Field) => Value): Value[] {
    const { value } = this;
    if (!Array.isArray(value)) this.refuse('must be a list');
    return (value as unknown[]).map((one, index) => read(new Field(one, `${this.path}[${index}]`)));
  }

  /** Numbers by name. No name is found in it but those that were sent. */
  numbers(read: (field: Field) => number): Readonly<Record<string, number>> {
    const result = Object.create(null) as Record<string, number>;
    for (const [name, value] of Object.entries(this.object())) {
      result[name] = read(new Field(value, `${this.path}[${JSON.stringify(name)}]`));
    }
    return result;
  }

  number(): number {
    const { value } = this;
    if (typeof value !== 'number' || !Number.isFinite(value)) this.refuse('must be a number');
    return value;
  }

  /** A number of 0 or more. */
  amount(): number {
    const amount = this.number();
    if (amount < 0) this.refuse(`must be 0 or more, not ${amount}`);
    return amount;
  }

  /** A whole number of 0 or more. */
  count(): number {
    const count = this.number();
    if (!Number.isSafeInteger(count) || count < 0) {
      this.refuse(`must be a whole number of 0 or more, not ${count}`);
    }
    return count;
  }

  text(): string {
    const { value } = this;
    if (typeof value !== 'string') this.refuse('must be a text');
    return value;
  }

  /** A text that names something, so it may not be empty. */
  name(): string {
    const name = this.text();
    if (name === '') this.refuse('must not be empty');
    return name;
  }

  refuse(trouble: string): never {
    throw new UnreadableField(
      this.path,
      this.value === undefined && trouble.startsWith('must be')
        ? `${trouble}; it is missing`
        : trouble,
    );
  }
}
