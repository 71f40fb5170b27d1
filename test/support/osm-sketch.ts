import type { OsmMember, OsmRelation, OsmWay, Tags } from '../../server/region/osm-model';
import { readExtract, type OsmExtract } from '../../server/region/osm-extract';
import { writeOsmPbf } from '../../server/region/osm-pbf-writer';

/** Degrees to a step of the sketch: about 100 m north, a little less east. */
const STEP = 0.0009;

/** A small map drawn on squared paper: nodes by their letter, ways as strings of letters. */
export interface Sketch {
  /** Rows from north to south; a letter is a node, anything else is empty. */
  readonly paper: readonly string[];
  readonly ways: readonly { readonly through: string; readonly tags: Tags }[];
  readonly nodeTags?: Readonly<Record<string, Tags>>;
  /** Members as `role:letter` for nodes and `role:3` for the third way. */
  readonly relations?: readonly { readonly members: readonly string[]; readonly tags: Tags }[];
}

export const placeOn = (paper: readonly string[], letter: string): [lon: number, lat: number] => {
  const row = paper.findIndex((line) => line.includes(letter));
  const column = paper[row]?.indexOf(letter) ?? -1;
  if (column < 0) throw new Error(`${letter} is not on the paper`);
  return [-47.7 + column * STEP, 36.4 - row * STEP];
};

/** The sketch as an importer reads it. */
export function extractOf({
  paper,
  ways,
  nodeTags = {},
  relations = [],
}: Sketch): Promise<OsmExtract> {
  const letters = [...new Set(paper.join('').replace(/[^A-Za-z]/g, ''))];
  const idOf = (letter: string): number => letter.charCodeAt(0);
  const osmWays = ways.map(({ through, tags }, i): OsmWay => ({
    id: i + 1,
    refs: [...through].map(idOf),
    tags,
  }));
  const osmRelations = relations.map(({ members, tags }, i): OsmRelation => ({
    id: i + 1,
    tags,
    members: members.map((member): OsmMember => {
      const [role = '', what = ''] = member.split(':');
      return /\d/.test(what)
        ? { type: 'way', ref: Number(what), role }
        : { type: 'node', ref: idOf(what), role };
    }),
  }));
  const nodes = letters.map((letter) => {
    const [lon, lat] = placeOn(paper, letter);
    return { id: idOf(letter), lon, lat, tags: nodeTags[letter] ?? {} };
  });
  return readExtract(writeOsmPbf({ nodes, ways: osmWays, relations: osmRelations }, 'sketch'));
}
