import type { Finding } from '../../../shared/contracts/lines.ts';

const sentences: Readonly<Record<string, string>> = {
  'negative-week-left-out': 'weeks with more returned than sold are left out of the fit',
  'gap-week-left-out': 'weeks with an empty shelf are left out of the fit',
  'closed-week-left-out': 'weeks without an open day are left out of the fit',
  'line-too-thin': 'too little history to fit the line: simple averages stand in for the model',
  'series-too-thin': 'too little history: a simple average stands in for the model',
  'series-intermittent': 'sells only now and then: forecast by a method made for that',
  'regular-price-inferred': 'no regular price given: taken from weeks without promotion',
  'column-never-happened': '{column} never happened in the history: its effect can’t be known',
  'column-never-moved': '{column} hardly ever moved: its effect can’t be known',
  'column-aliased': '{column} always goes together with something else: its own effect can’t be told',
  'wrong-sign-line': '{column} came out with a sign that can’t be: its effect is taken as none',
  'wrong-sign-own': '{column} came out with a sign that can’t be: the line’s effect is taken instead',
  'ranges-not-scaled': 'too little history to check the ranges by back-test: they are as simulated',
  'outlier-week-weighed-less': 'weeks far from everything else weigh less in the fit',
};

/** What a fit had to tell, one sentence per kind and column, with the number of places it concerns. */
export function describeFindings(findings: readonly Finding[]): string[] {
  const groups = new Map<string, { sentence: string; places: Set<string> }>();
  for (const { kind, item, location, values = {} } of findings) {
    const sentence = (sentences[kind] ?? kind).replace('{column}', String(values.column ?? ''));
    const group = groups.get(sentence) ?? { sentence, places: new Set<string>() };
    const place = [item, location].filter((part) => part !== undefined).join(', ');
    if (place !== '') group.places.add(place);
    groups.set(sentence, group);
  }
  return [...groups.values()].map(({ sentence, places }) => {
    const text = sentence.charAt(0).toUpperCase() + sentence.slice(1);
    if (places.size === 0) return `${text}.`;
    const named = [...places].slice(0, 3).join('; ');
    return places.size <= 3 ? `${text} (${named}).` : `${text} (${named} and ${places.size - 3} more).`;
  });
}
