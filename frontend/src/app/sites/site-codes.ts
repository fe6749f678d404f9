/**
 * Sites as their codes; those that someone may not see, who still knows that there are some, as their number.
 *
 * @param ids at least one
 * @param seen the sites that the reader may see
 */
export function siteCodes(ids: readonly number[], seen: readonly { readonly id: number; readonly code: string }[]): string {
  const codes = ids.flatMap((id) => seen.find((site) => site.id === id)?.code ?? []);
  const others = ids.length - codes.length;
  return [...codes, ...(others === 0 ? [] : [`${others} other site${others === 1 ? '' : 's'}`])].join(', ');
}
