import fs from 'node:fs';

/** A vitest reporter that writes, for run.mjs, how many tests of each project did what, to the file TALLY_FILE. */
export default class Tally {
  onTestRunEnd(modules, unhandledErrors) {
    const tally = { projects: {}, skipped: [], errors: unhandledErrors.length };
    for (const module of modules) {
      const count = (tally.projects[module.project.name] ??= { passed: 0, failed: 0 });
      // A file or a hook that fails takes its tests with it: they are not counted, so it is.
      const suites = [module, ...module.children.allSuites()];
      count.failed += suites.filter((suite) => suite.errors().length > 0).length;
      for (const test of module.children.allTests()) {
        const { state, note } = test.result();
        if (state === 'passed' || state === 'failed') count[state] += 1;
        else tally.skipped.push({ title: `${module.relativeModuleId} > ${test.fullName}`, reason: note ?? null });
      }
    }
    fs.writeFileSync(process.env.TALLY_FILE, JSON.stringify(tally));
  }
}
