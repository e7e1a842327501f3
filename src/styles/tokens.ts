/**
 * The colours, one meaning each, for light and dark. Everything that is drawn takes its colour from here: the Vuetify
 * theme, the charts, the cylinder and the print sheet. Contrast and colour-vision distances are held by
 * tests/unit/src/tokens.test.ts.
 */
export interface Palette {
  /** The page. */
  paper: string;
  /** What lies on the page: fields, slips, menus. */
  sheet: string;
  ink: string;
  /** Second voice: units, captions, what a figure rests on. */
  pencil: string;
  /** Ruled lines, for the eye only. */
  rule: string;
  /** Edges that a control or a drawing needs to be seen. */
  edge: string;
  /** Links, the focus ring and the one action of a page. */
  action: string;
  onAction: string;
  /** Diverted, the sun’s. */
  sun: string;
  /** Backup fuel. */
  fuel: string;
  exported: string;
  /** Water and heat. */
  water: string;
  /** Tank temperature. */
  tank: string;
  /** Needs a person. */
  person: string;
}

export const MEANINGS = ['sun', 'fuel', 'exported', 'water', 'tank', 'person'] as const;
export type Meaning = (typeof MEANINGS)[number];

export const LIGHT: Palette = {
  paper: '#f6f1e4',
  sheet: '#fcf9f1',
  ink: '#22252a',
  pencil: '#575a5c',
  rule: '#d3cab6',
  edge: '#837b6b',
  action: '#1f4e5a',
  onAction: '#ffffff',
  sun: '#b97a00',
  fuel: '#4d1c5c',
  exported: '#66879d',
  water: '#2b6570',
  tank: '#a3420f',
  person: '#760f10',
};

export const DARK: Palette = {
  paper: '#1d1e1c',
  sheet: '#262724',
  ink: '#ece6d8',
  pencil: '#b3aea2',
  rule: '#43433d',
  edge: '#8b877b',
  action: '#9fd2da',
  onAction: '#10262b',
  sun: '#ffc05a',
  fuel: '#b26cca',
  exported: '#d5e2f0',
  water: '#6fb9c4',
  tank: '#b85c12',
  person: '#f07d6c',
};

export const PALETTES = { light: LIGHT, dark: DARK } as const;
export type ThemeName = keyof typeof PALETTES;
