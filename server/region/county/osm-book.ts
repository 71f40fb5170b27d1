import type { OsmData, OsmMember, OsmNode, OsmRelation, OsmWay, Tags } from '../osm-model';
import { toLonLat, type Point } from './plane';

/** OpenStreetMap data in the making; ids count upward from 1 by kind. */
export class OsmBook implements OsmData {
  readonly nodes: OsmNode[] = [];
  readonly ways: OsmWay[] = [];
  readonly relations: OsmRelation[] = [];

  node(at: Point, tags: Tags = {}): number {
    const [lon, lat] = toLonLat(at);
    const id = this.nodes.length + 1;
    this.nodes.push({ id, lon, lat, tags });
    return id;
  }

  way(refs: readonly number[], tags: Tags): number {
    const id = this.ways.length + 1;
    this.ways.push({ id, refs, tags });
    return id;
  }

  relation(members: readonly OsmMember[], tags: Tags): void {
    this.relations.push({ id: this.relations.length + 1, members, tags });
  }

  /** A closed ring's nodes; the last is the first. */
  ring(points: readonly Point[]): number[] {
    const refs = points.slice(0, -1).map((p) => this.node(p));
    return [...refs, refs[0]!];
  }
}
