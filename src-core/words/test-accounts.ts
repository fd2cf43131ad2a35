import type { Evidence } from '../protocol/result';
import { testWords } from './evidence-names';
import { count, list, number } from './numbers';
import { whyNotText } from './readings';
import { parameterSign } from './structures';

/** The auxiliary regression of a test: what was regressed on what, and what it divides by. */
function auxiliaryText({ test, detail }: Evidence): string {
  const columns = Array.isArray(detail['columns']) ? detail['columns'].filter((one) => typeof one === 'string') : null;
  const kept = typeof detail['kept'] === 'number' ? detail['kept'] : null;
  switch (test) {
    case 'size-slope':
      return slopeText(detail);
    case 'goldfeld-quandt':
      return typeof detail['cells'] === 'number'
        ? `${count(detail['cells'])} cells at each end, ${count(Number(detail['left']))} left out between`
        : '';
    case 'brown-forsythe':
      return Array.isArray(detail['cells'])
        ? `quarters of ${detail['cells'].map((n) => count(Number(n))).join(', ')} cells`
        : '';
    case 'dumouchel-duncan':
      return typeof detail['columns'] === 'number'
        ? `the model’s columns times ${detail['added'] === 'size' ? 'size' : 'the stated variance'} added: ${count(detail['columns'])}`
        : '';
    case 'dependence':
      return typeof detail['pairs'] === 'number' ? `${count(detail['pairs'])} pairs of cells` : '';
    case 'boundary-likelihood-ratio':
      return typeof detail['likelihood'] === 'string' ? `by ${detail['likelihood']} likelihood` : '';
    default:
      if (columns === null) return '';
      if (columns.length <= 3) return `squared residuals on ${list(columns)}`;
      return `squared residuals on ${count(kept ?? columns.length)} columns`;
  }
}

function slopeText(detail: Evidence['detail']): string {
  const [intercept, slope] = [detail['intercept'], detail['slope']];
  if (typeof intercept !== 'number' || typeof slope !== 'number') return '';
  const on = detail['on'] === 'size' ? 'size' : '1 / size';
  const [first, second] = detail['on'] === 'size' ? ['φ', 'τ²'] : ['τ²', 'φ'];
  const se = (value: unknown): string => (typeof value === 'number' ? ` ± ${number(value, { digits: 2 })}` : '');
  return `squared residuals on ${on}: intercept (${first}) ${number(intercept, { digits: 3 })}${se(detail['intercept_se'])}, slope (${second}) ${number(slope, { digits: 3 })}${se(detail['slope_se'])}`;
}

/** A likelihood ratio names what it sets to 0. */
function asksOf({ test, detail }: Evidence): string {
  const zero = Array.isArray(detail['zero']) ? detail['zero'].filter((one) => typeof one === 'string') : [];
  if (test !== 'boundary-likelihood-ratio' || zero.length === 0) return testWords[test].asks;
  const signs = list(zero.map(parameterSign));
  return zero.length === 1 ? `Is ${signs} above zero?` : `Is any of ${signs} above zero?`;
}

/** What a test asks of the data, then how it was made, or why it has no say. */
export function testAccount(one: Evidence): string {
  const more = whyNotText(one) ?? auxiliaryText(one);
  const asks = asksOf(one);
  return more === '' ? asks : `${asks} ${more.charAt(0).toUpperCase()}${more.slice(1)}.`;
}
