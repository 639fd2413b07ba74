import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { call } from '#client/api/call.ts';
import {
  comparePriceBooks,
  createPriceBook,
  getPriceBook,
  listPriceBooks,
  putPriceBookInForce,
} from '#contract/catalogue';
import type { ContractCall } from '#contract/define';

export const priceBooksQuery = queryOptions({
  queryKey: ['price-books'],
  queryFn: ({ signal }) => call(listPriceBooks, {}, signal),
});

export const priceBookQuery = (priceBookId: number) =>
  queryOptions({
    queryKey: ['price-books', priceBookId],
    queryFn: ({ signal }) => call(getPriceBook, { params: { priceBookId } }, signal),
  });

export const bookChangesQuery = (priceBookId: number) =>
  queryOptions({
    queryKey: ['price-books', priceBookId, 'changes'],
    queryFn: ({ signal }) => call(comparePriceBooks, { params: { priceBookId } }, signal),
  });

export function useCreateBook() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (input: ContractCall<typeof createPriceBook>) => call(createPriceBook, input),
    onSuccess: () => client.invalidateQueries({ queryKey: ['price-books'] }),
  });
}

export function usePutInForce() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (input: ContractCall<typeof putPriceBookInForce>) => call(putPriceBookInForce, input),
    onSuccess: async () => {
      await client.invalidateQueries({ queryKey: ['price-books'] });
      await client.invalidateQueries({ queryKey: ['pricing-book'] });
    },
  });
}
