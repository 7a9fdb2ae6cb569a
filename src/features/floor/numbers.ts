/** A number as the pads type it, complete: "12", "0.25", but not "" or "0.". */
export function isNumber(typed: string): boolean {
  return /^\d+(\.\d+)?$/.test(typed);
}

/** A typed number with the digits that a trail keeps: no leading zeros, "0.25" for ".25". */
export function decimalText(typed: string): string {
  return typed.replace(/^0+(?=\d)/, '');
}
