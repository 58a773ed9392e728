// A short name for addresses from what a person calls a thing: small letters, digits and hyphens.
export function keyFrom(name: string): string {
  const plain = name.normalize('NFKD').replace(/[\u0300-\u036f]/g, '').toLowerCase().replaceAll('ß', 'ss');
  return plain.replace(/[^a-z0-9]+/g, '-').replace(/^-+|-+$/g, '').slice(0, 60).replace(/-+$/, '');
}
