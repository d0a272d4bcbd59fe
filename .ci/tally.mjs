// tally.mjs REPORT.json STATUS: the line "N passed, N failed" from the runner's report and its exit status.
import { existsSync, readFileSync } from 'node:fs';

const [report, status] = process.argv.slice(2);
const files = existsSync(report) ? JSON.parse(readFileSync(report, 'utf8')).testResults : [];
let passed = 0;
let failed = 0;
for (const file of files) {
  const count = (wanted) => file.assertionResults.filter((test) => test.status === wanted).length;
  passed += count('passed');
  // A file that could not be loaded failed, though none of its tests did.
  failed += file.status === 'failed' ? Math.max(1, count('failed')) : 0;
}
// So did a run that ended badly with every test well, and a run without tests.
if (failed === 0 && (status !== '0' || passed === 0)) failed = 1;
console.log(`${passed} passed, ${failed} failed`);
process.exitCode = failed === 0 ? 0 : 1;
