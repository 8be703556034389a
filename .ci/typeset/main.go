// Command typeset writes the formulas of testdata/golden for the programs that
// set them: a LaTeX document, a JSON list of formulas, and an HTML page with
// MathML that counts the formulas whose boxes are empty.
package main

import (
	"encoding/json"
	"fmt"
	"log"
	"os"
	"path/filepath"
	"strings"

	"example.org/closedform/expr"
)

func main() {
	if len(os.Args) != 2 {
		log.Fatal("usage: typeset DIR")
	}
	files, err := filepath.Glob("testdata/golden/*.out")
	if err != nil || len(files) < 40 {
		log.Fatalf("%d golden outputs, %v", len(files), err)
	}
	var tex, page strings.Builder
	var formulas []string
	tex.WriteString("\\documentclass{article}\n\\usepackage{amsmath}\n\\usepackage[a3paper,landscape,margin=1cm]{geometry}\n\\begin{document}\n")
	page.WriteString("<!DOCTYPE html><meta charset=\"utf-8\"><title>formulas</title>\n")
	count := 0
	for _, file := range files {
		src, err := os.ReadFile(file)
		if err != nil {
			log.Fatal(err)
		}
		for _, line := range strings.Split(string(src), "\n") {
			if s, ok := strings.CutPrefix(line, "  latex  "); ok {
				fmt.Fprintf(&tex, "\\noindent $\\displaystyle %s$\\par\\medskip\n", s)
				formulas = append(formulas, s)
			}
			s, isText := strings.CutPrefix(line, "  text   ")
			if !isText {
				if s, isText = strings.CutPrefix(line, "  digits "); !isText {
					continue
				}
			}
			n, err := expr.Parse(s, expr.Limits{})
			if err != nil {
				log.Fatalf("%s: %v", file, err)
			}
			fmt.Fprintf(&page, "<p>%s</p>\n", expr.MathML(n))
			count++
		}
	}
	tex.WriteString("\\end{document}\n")
	fmt.Fprintf(&page, `<p id="verdict"></p><script>
const all = [...document.querySelectorAll("math")];
const boxes = all.filter(m => { const b = m.getBoundingClientRect(); return b.width > 0 && b.height > 0; });
const broken = document.querySelectorAll("merror").length;
document.getElementById("verdict").textContent = (all.length == %d && boxes.length == all.length && broken == 0) ? "all %d formulas are set" : "formulas are missing";
</script>`, count, count)
	list, err := json.Marshal(formulas)
	if err != nil {
		log.Fatal(err)
	}
	for name, content := range map[string]string{"formulas.tex": tex.String(), "formulas.json": string(list), "formulas.html": page.String()} {
		if err := os.WriteFile(filepath.Join(os.Args[1], name), []byte(content), 0o644); err != nil {
			log.Fatal(err)
		}
	}
	fmt.Printf("%d formulas in LaTeX, %d in MathML\n", len(formulas), count)
}
