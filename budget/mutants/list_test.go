package mutants

import (
	"fmt"
	"strings"
)

// excused reads the list of mutants that no test need notice. A reason stands on lines
// that begin with #; it holds for the mutants that follow it, one a line, as far as
// the next reason.
func excused(text string) (reasons map[string]string, err error) {
	reasons = map[string]string{}
	reason, open := "", false
	for i, line := range strings.Split(text, "\n") {
		line = strings.TrimSpace(line)
		switch words, comment := strings.CutPrefix(line, "#"); {
		case line == "":
			reason, open = "", false
		case comment && open:
			return nil, fmt.Errorf("line %d: a reason within a list of mutants: leave a line blank", i+1)
		case comment:
			reason = strings.TrimSpace(reason + " " + strings.TrimSpace(words))
		case reason == "":
			return nil, fmt.Errorf("line %d: no reason is given", i+1)
		case reasons[line] != "":
			return nil, fmt.Errorf("line %d: excused twice", i+1)
		default:
			reasons[line], open = reason, true
		}
	}
	return reasons, nil
}
