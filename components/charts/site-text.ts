/** Returns a site's name as it reads in a sentence: many archives call their columns "site_3" already. */
export function siteText(name: string): string {
  return /^site/i.test(name) ? name : `site ${name}`;
}
