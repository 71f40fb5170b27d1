/** Which rows a command changed. What boards and phones are told follows from this alone. */
export class Touched {
  readonly calls = new Set<string>();
  readonly stops = new Set<string>();
  readonly technicians = new Set<string>();
  readonly areas = new Set<string>();
  readonly areasGone = new Set<string>();
  readonly stormRoads = new Set<string>();
  readonly stormRoadsGone = new Set<string>();
  readonly plans = new Set<string>();
  readonly messages = new Set<string>();
  storm = false;
  settings = false;
  /** Stops that left a technician's day for another's, and what to say about it. */
  readonly left: { technicianId: string; stopId: string; reason: string }[] = [];

  call(id: string): this {
    this.calls.add(id);
    return this;
  }

  stop(id: string): this {
    this.stops.add(id);
    return this;
  }
}
