import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { englishTexts } from '../../../src/app/i18n.ts';
import { importKinds, importStates } from '../../../shared/contracts/sales.ts';
import { columnMeanings } from '../../../shared/domain/column-meanings.ts';
import { waitingKinds } from '../../../shared/contracts/waiting.ts';
import { roles } from '../../../shared/domain/roles.ts';

type Texts = { [key: string]: string | string[] | Texts };

function hasText(namespace: string, key: string): boolean {
  const texts = (englishTexts as unknown as Record<string, Texts>)[namespace];
  const parts = key.split('.');
  const last = parts.pop() ?? '';
  let at: Texts | undefined = texts;
  for (const part of parts) at = at?.[part] as Texts | undefined;
  return at !== undefined && [last, `${last}_other`].some((name) => typeof at[name] === 'string');
}

const folder = join(import.meta.dirname, '../../../src');
const files = readdirSync(folder, { recursive: true, encoding: 'utf8' }).filter((name) => name.endsWith('.tsx'));

/** Keys written out in calls of `t`, with the namespace that the file asks for. */
function listKeys(file: string): { namespace: string; key: string }[] {
  const source = readFileSync(join(folder, file), 'utf8');
  const own = /useTranslation\('([\w-]+)'\)/.exec(source)?.[1] ?? 'common';
  return [...source.matchAll(/\bt\(\s*'([^'$]+)'/g)].map(([, text = '']) => {
    const [namespace, key] = text.includes(':') ? text.split(':') : [own, text];
    return { namespace: namespace ?? own, key: key ?? text };
  });
}

describe('texts', () => {
  it('are there for every key that a component names', () => {
    const named = files.flatMap((file) => listKeys(file).map((entry) => ({ file, ...entry })));
    expect(named.length).toBeGreaterThan(200);
    expect(named.filter(({ namespace, key }) => !hasText(namespace, key))).toEqual([]);
  });

  it.each([
    ['sales', 'meaning', columnMeanings],
    ['sales', 'state', importStates],
    ['sales', 'kind', importKinds],
    ['common', 'role', roles],
  ])('of %s name every %s', (namespace, group, names) => {
    expect(names.filter((name) => !hasText(namespace, `${group}.${name}`))).toEqual([]);
  });

  it('word every kind of entry that can wait', () => {
    const missing = waitingKinds.filter(
      (kind) => !hasText('waiting', `entry.${kind}.title`) || !hasText('waiting', `entry.${kind}.go`),
    );
    expect(missing).toEqual([]);
  });
});
