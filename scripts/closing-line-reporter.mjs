import { writeFileSync } from "node:fs";

/** Ends a test run with `N passed, N failed`, and leaves the counts in the file that STRANDLINE_TEST_COUNTS names. */
export default class ClosingLineReporter {
  onTestRunEnd(files, unhandledErrors) {
    const counts = { passed: 0, failed: unhandledErrors.length };
    for (const file of files) {
      const before = counts.failed;
      for (const test of file.children.allTests()) {
        const { state } = test.result();
        if (state === "passed") counts.passed += 1;
        else counts.failed += 1;
      }
      if (file.state() === "failed" && counts.failed === before) counts.failed += 1;
    }
    const countsFile = process.env.STRANDLINE_TEST_COUNTS;
    if (countsFile) writeFileSync(countsFile, JSON.stringify(counts));
    console.log(`${counts.passed} passed, ${counts.failed} failed`);
  }
}
