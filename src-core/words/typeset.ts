const hard = '\u00a0';

/**
 * Binds what a line may not part: "p = 0.25", "t on 52", "F = 2.5 on 2 and 6", a number and its per cent.
 *
 *     typeset('p < 0.001')   // with no-break spaces
 */
export function typeset(text: string): string {
  return text
    .replace(/\b([pFWIQt]) ([=<>]) (?=[\d−])/g, `$1${hard}$2${hard}`)
    .replace(/\bt on (?=\d)/g, `t${hard}on${hard}`)
    .replace(/\b(chi-square|F|W|I|Q|ratio|error) (?=[\d−])/g, `$1${hard}`)
    .replace(/ on (?=\d)/g, ` on${hard}`)
    .replace(/(\S{1,16}) = (?=\S{1,16}(?:\s|$|[,.;:)]))/g, `$1${hard}=${hard}`)
    .replace(/ × 10(?=[⁰¹²³⁴⁵⁶⁷⁸⁹⁻])/g, `${hard}×${hard}10`)
    .replace(/ · (?=\S{1,12}(?:\s|$|[,.;:)]))/g, `${hard}·${hard}`)
    .replace(/\b(\d+) (?=cells?\b)/g, `$1${hard}`);
}
