/** A piece of the reckoning: plain words, the figure that is explained, an input, or the source. */
export interface Piece {
  readonly text: string;
  readonly style?: 'strong' | 'input' | 'source';
}

/** What the foot of the sheet says about the focused number: at most two lines. */
export type Reckoning = readonly (readonly Piece[])[];

export const strong = (text: string): Piece => ({ text, style: 'strong' });
export const input = (text: string): Piece => ({ text, style: 'input' });
export const source = (text: string): Piece => ({ text, style: 'source' });
export const words = (text: string): Piece => ({ text });
