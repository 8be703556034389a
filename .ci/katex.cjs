// Sets every formula of a JSON list in the strict mode of the web's LaTeX subset.
const [, , folder, list] = process.argv;
const katex = require(folder + "/node_modules/katex");
const formulas = JSON.parse(require("fs").readFileSync(list, "utf8"));
for (const f of formulas) {
  katex.renderToString(f, { strict: "error", throwOnError: true, displayMode: true });
}
console.log(formulas.length + " formulas are set in strict mode");
