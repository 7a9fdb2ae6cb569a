/** An action that can be touched: there, and neither barred nor busy. */
export const TOUCHABLE = 'button.main-action:not([aria-disabled="true"])';
