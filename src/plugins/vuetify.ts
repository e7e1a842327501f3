import 'vuetify/styles/core';
import { createVuetify } from 'vuetify';
import type { ThemeDefinition } from 'vuetify';
import { aliases, mdi } from 'vuetify/iconsets/mdi-svg';
import { DARK, LIGHT } from '../styles/tokens.ts';
import type { Palette } from '../styles/tokens.ts';

function theme(palette: Palette, dark: boolean): ThemeDefinition {
  return {
    dark,
    colors: {
      ...palette,
      background: palette.paper,
      'on-background': palette.ink,
      surface: palette.sheet,
      'on-surface': palette.ink,
      primary: palette.action,
      'on-primary': palette.onAction,
      secondary: palette.pencil,
      error: palette.person,
      info: palette.water,
      success: palette.water,
      warning: palette.person,
    },
    variables: {
      'border-color': palette.edge,
      'border-opacity': 1,
      'high-emphasis-opacity': 1,
      'medium-emphasis-opacity': 0.86,
    },
  };
}

const field = { variant: 'outlined', density: 'comfortable', color: 'primary', rounded: 'sm' } as const;

/** Vuetify in our own dress: flat, ruled, small corners; set once, here. */
export const vuetify = createVuetify({
  icons: { defaultSet: 'mdi', aliases, sets: { mdi } },
  theme: { defaultTheme: 'system', themes: { light: theme(LIGHT, false), dark: theme(DARK, true) } },
  defaults: {
    VBtn: { variant: 'outlined', density: 'comfortable', rounded: 'sm', elevation: 0, ripple: false },
    VCard: { variant: 'flat', rounded: 'sm', elevation: 0 },
    VTextField: { ...field },
    VSelect: { ...field },
    VAutocomplete: { ...field },
    VCombobox: { ...field },
    VTextarea: { ...field },
    VFileInput: { ...field },
    VCheckbox: { density: 'comfortable', color: 'primary' },
    VRadioGroup: { density: 'comfortable', color: 'primary' },
    VSwitch: { density: 'comfortable', color: 'primary' },
    VAlert: { variant: 'outlined', rounded: 'sm', density: 'comfortable' },
    VDialog: { maxWidth: 560 },
    VList: { density: 'comfortable', elevation: 0 },
    VProgressLinear: { color: 'primary', height: 4 },
    VExpansionPanels: { elevation: 0, rounded: 'sm', variant: 'accordion' },
  },
});
