/** The three kinds of OpenStreetMap data, as far as this project needs them. Degrees are WGS84. */
export type Tags = Readonly<Record<string, string>>;

export interface OsmNode {
  readonly id: number;
  readonly lon: number;
  readonly lat: number;
  readonly tags: Tags;
}

export interface OsmWay {
  readonly id: number;
  readonly refs: readonly number[];
  readonly tags: Tags;
}

export interface OsmMember {
  readonly type: 'node' | 'way' | 'relation';
  readonly ref: number;
  readonly role: string;
}

export interface OsmRelation {
  readonly id: number;
  readonly members: readonly OsmMember[];
  readonly tags: Tags;
}

export interface OsmData {
  readonly nodes: readonly OsmNode[];
  readonly ways: readonly OsmWay[];
  readonly relations: readonly OsmRelation[];
}
