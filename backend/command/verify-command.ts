import { verifyCertificate } from '#shared/contract/verify-certificate';
import { sha256 } from '../candidates/sha256';
import { earthBarycentricVelocityMS } from '../frames/ephemeris';
import { VERSION } from '../version';
import { readOption } from './readable-file';
import { UsageProblem } from './usage-problem';

/**
 * Checks a certificate without a server: everything in it is computed again from the verbatim readings.
 *
 * @param path of the file
 * @param print takes a line for each part that agrees and for each place that does not
 * @throws UsageProblem for a file that is no certificate; an error where one does not hold
 */
export function verifyFile(path: string, print: (line: string) => void): void {
  const findings = verifyCertificate(readOption('certificate', path), {
    sha256,
    earthVelocity: earthBarycentricVelocityMS,
    program: VERSION,
  });
  if (!findings.ok) throw UsageProblem.of(findings.problem, path);
  for (const { holds, where, text } of findings.value) print(`${holds ? 'agrees' : 'DIFFERS'}  ${where}: ${text}`);
  const broken = findings.value.filter(({ holds }) => !holds);
  if (broken.length > 0)
    throw new Error(`${path}: the certificate does not hold, in ${broken.length} ${broken.length === 1 ? 'place' : 'places'}`);
  print('the certificate holds');
}
