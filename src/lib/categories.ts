import { queryOptions, useSuspenseQuery } from '@tanstack/react-query';
import { useCallback } from 'react';
import { useSearchParams } from 'react-router-dom';
import { type Category, CategoryList } from '../../shared/contracts/lines.ts';
import { request } from './api.ts';

export const categoriesQuery = queryOptions({
  queryKey: ['categories'],
  queryFn: ({ signal }) => request(CategoryList, '/categories', { signal }),
});

export function useCategories(): CategoryList {
  return useSuspenseQuery(categoriesQuery).data;
}

/** `/plan?category=2` of `/plan` and 2; keeps what the path already asks for. */
export function withCategory(path: string, categoryId: number | null): string {
  if (categoryId === null) return path;
  const [place = '', search = ''] = path.split('?');
  const parameters = new URLSearchParams(search);
  parameters.set('category', String(categoryId));
  return `${place}?${parameters.toString()}`;
}

export interface CategoryInView {
  /** Null only where the person has no category at all. */
  category: Category | null;
  categories: Category[];
  /** 0 = Sunday … 6 = Saturday; null until the first import fixes it. */
  firstWeekday: number | null;
  chooseCategory: (id: number) => void;
}

/** The category named by `?category=`, else the first one the person may see. */
export function useCategoryInView(): CategoryInView {
  const { categories, firstWeekday } = useCategories();
  const [parameters, setParameters] = useSearchParams();
  const asked = Number(parameters.get('category'));
  const category = categories.find(({ id }) => id === asked) ?? categories[0] ?? null;
  const chooseCategory = useCallback(
    (id: number) => {
      setParameters({ category: String(id) });
    },
    [setParameters],
  );
  return { category, categories, firstWeekday, chooseCategory };
}
