/**
 * One key for spellings that English speakers hear alike: "Wigeon" and "widgen", "Gneiss" and
 * "nice". Made for street names that are heard over a phone; our own rules.
 */
export function soundKey(word: string): string {
  const key = word
    .replace(/^(gn|kn|pn)/, 'n')
    .replace(/^wr/, 'r')
    .replace(/^ps/, 's')
    .replace(/mb$/, 'm')
    .replace(/dg(?=[eiy])/g, 'j')
    .replace(/g(?=[eiy])/g, 'j')
    .replace(/gh(?![aeiou])/g, '')
    .replace(/ph/g, 'f')
    .replace(/wh/g, 'w')
    .replace(/sch/g, 'sk')
    .replace(/tch/g, 'ch')
    .replace(/t(?=ch)/g, '')
    .replace(/c(?=[eiy])/g, 's')
    .replace(/ch/g, 'C')
    .replace(/ck|c|q|x/g, (found) => (found === 'x' ? 'ks' : 'k'))
    .replace(/z/g, 's')
    .replace(/kw/g, 'ku')
    .replace(/(.)\1+/g, '$1');
  // Vowels between consonants are what people hear worst, but where they stand they hear.
  return key.replace(/e$/, '').replace(/(?!^)[aeiouyw]+/g, 'a');
}
