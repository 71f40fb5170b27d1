/** The two kinds of tile, as the rules name them. */
export const GROUND = 'ground';
/** House numbers are many and wanted only close by, so they have tiles of their own. */
export const NUMBERS = 'numbers';
