/** Side of a tile in CSS pixels. */
export const TILE_PX = 256;
