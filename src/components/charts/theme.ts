import type { Palette } from '../../styles/tokens.ts';

/** How the charts are drawn: ruled like the page, no boxes, no shadows, figures in the meter’s type. */
export const FIGURES_FONT = "'Roboto Mono', 'Courier New', monospace";

/** Our own theme for ECharts, from the tokens. */
export function chartTheme(palette: Palette) {
  const axis = {
    axisLine: { show: true, lineStyle: { color: palette.edge, width: 1 } },
    axisTick: { show: true, lineStyle: { color: palette.edge } },
    axisLabel: { color: palette.ink, fontFamily: FIGURES_FONT, fontSize: 12 },
    nameTextStyle: { color: palette.pencil, fontFamily: FIGURES_FONT, fontSize: 12 },
    splitLine: { lineStyle: { color: palette.rule, width: 1 } },
  };
  return {
    backgroundColor: 'transparent',
    textStyle: { fontFamily: FIGURES_FONT, color: palette.ink },
    categoryAxis: { ...axis, splitLine: { show: false } },
    valueAxis: axis,
    grid: { borderWidth: 0 },
  };
}

/** The second cue beside a colour: how a filled shape of this meaning is hatched. */
export type Hatch = 'plain' | 'diagonal' | 'across' | 'dots';

/** ECharts’ decal for a hatch, drawn in the colour of the paper. */
export function decal(hatch: Hatch, palette: Palette): object | undefined {
  const ink = palette.paper;
  if (hatch === 'diagonal')
    return { symbol: 'rect', color: ink, dashArrayX: [1, 0], dashArrayY: [2, 4], rotation: -Math.PI / 4 };
  if (hatch === 'across') return { symbol: 'rect', color: ink, dashArrayX: [1, 0], dashArrayY: [2, 3], rotation: 0 };
  if (hatch === 'dots')
    return {
      symbol: 'circle',
      symbolSize: 0.8,
      color: ink,
      dashArrayX: [
        [4, 4],
        [0, 4, 4, 0],
      ],
      dashArrayY: [4, 0],
    };
  return undefined;
}
