/**
 * The theme of the component library, made from the colour tokens of tokens.css. The library computes with colours, so it
 * needs values and not variables: they are read from the page whenever the appearance changes.
 */
import type { GlobalThemeOverrides } from 'naive-ui';

const TOKENS = ['paper', 'sheet', 'wash', 'hair', 'wire', 'edge', 'ink', 'soft', 'leaf', 'brick', 'damson'] as const;
type Token = (typeof TOKENS)[number];

/** A probe resolves each variable to the colour that holds now, light or dark. */
function readTokens(root: HTMLElement): Record<Token, string> {
  const probe = document.createElement('span');
  root.append(probe);
  const colours = TOKENS.map((name) => {
    probe.style.color = `var(--${name})`;
    return [name, getComputedStyle(probe).color] as const;
  });
  probe.remove();
  return Object.fromEntries(colours) as Record<Token, string>;
}

/** Overrides for light and dark alike: the tokens have changed by the time this is called. */
export function naiveOverrides(root: HTMLElement): GlobalThemeOverrides {
  const t = readTokens(root);
  const control = getComputedStyle(root).getPropertyValue('--control').trim();
  return {
    common: {
      fontFamily: getComputedStyle(root).getPropertyValue('--sans'),
      fontFamilyMono: getComputedStyle(root).getPropertyValue('--mono'),
      fontSize: '15px',
      fontSizeMedium: '15px',
      lineHeight: '22px',
      borderRadius: '3px',
      heightMedium: control,
      bodyColor: t.paper,
      baseColor: t.paper,
      textColorBase: t.ink,
      textColor1: t.ink,
      textColor2: t.ink,
      textColor3: t.soft,
      placeholderColor: t.soft,
      placeholderColorDisabled: t.soft,
      borderColor: t.edge,
      dividerColor: t.hair,
      inputColor: t.sheet,
      modalColor: t.sheet,
      popoverColor: t.sheet,
      primaryColor: t.ink,
      primaryColorHover: t.ink,
      primaryColorPressed: t.ink,
      primaryColorSuppl: t.ink,
      errorColor: t.ink,
      errorColorHover: t.ink,
      errorColorPressed: t.ink,
      errorColorSuppl: t.ink,
      boxShadow1: 'none',
      boxShadow2: 'none',
      boxShadow3: `0 0 0 1px ${t.edge}`,
    },
    Button: {
      fontWeight: '500',
      paddingMedium: '0 15px',
      rippleDuration: '0s',
      color: t.sheet,
      colorHover: t.wash,
      colorPressed: t.wash,
      colorFocus: t.sheet,
      colorDisabled: t.sheet,
      textColor: t.ink,
      textColorHover: t.ink,
      textColorPressed: t.ink,
      textColorFocus: t.ink,
      textColorDisabled: t.soft,
      border: `1px solid ${t.edge}`,
      borderHover: `1px solid ${t.ink}`,
      borderPressed: `1px solid ${t.ink}`,
      borderFocus: `1px solid ${t.edge}`,
      borderDisabled: `1px solid ${t.hair}`,
      opacityDisabled: '1',
      textColorPrimary: t.paper,
      textColorHoverPrimary: t.paper,
      textColorPressedPrimary: t.paper,
      textColorFocusPrimary: t.paper,
      textColorDisabledPrimary: t.paper,
      colorPrimary: t.ink,
      colorHoverPrimary: t.soft,
      colorPressedPrimary: t.soft,
      colorFocusPrimary: t.ink,
      colorDisabledPrimary: t.soft,
      borderPrimary: `1px solid ${t.ink}`,
      borderHoverPrimary: `1px solid ${t.soft}`,
      borderPressedPrimary: `1px solid ${t.soft}`,
      borderFocusPrimary: `1px solid ${t.ink}`,
      borderDisabledPrimary: `1px solid ${t.soft}`,
    },
    Input: {
      color: t.sheet,
      colorFocus: t.sheet,
      colorDisabled: t.wash,
      textColor: t.ink,
      textColorDisabled: t.soft,
      caretColor: t.ink,
      border: `1px solid ${t.edge}`,
      borderHover: `1px solid ${t.ink}`,
      borderFocus: `1px solid ${t.damson}`,
      borderDisabled: `1px solid ${t.hair}`,
      boxShadowFocus: `0 0 0 1px ${t.damson}`,
      paddingMedium: '12px',
    },
  };
}
