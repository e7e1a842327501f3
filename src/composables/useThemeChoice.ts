import { watch } from 'vue';
import type { RemovableRef } from '@vueuse/core';
import { useStorage } from '@vueuse/core';
import { useTheme } from 'vuetify';

export const THEME_CHOICES = ['system', 'light', 'dark'] as const;
export type ThemeChoice = (typeof THEME_CHOICES)[number];

/** Light, dark, or as the device has it; kept in this browser. */
export function useThemeChoice(): RemovableRef<ThemeChoice> {
  const theme = useTheme();
  const choice = useStorage<ThemeChoice>('coppernoon-theme', 'system');
  watch(choice, (name) => theme.change(THEME_CHOICES.includes(name) ? name : 'system'), { immediate: true });
  return choice;
}
