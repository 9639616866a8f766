package schema

import "strings"

// edits counts the letters that have to be put in, taken out, replaced or swapped with their neighbour to turn a into b
// (optimal string alignment). The source: F. J. Damerau, "A technique for computer detection and correction of spelling
// errors", Communications of the ACM 7 (1964) 171-176, which found that four of five misspellings are one of these edits.
func edits(a, b string) int {
	x, y := []rune(a), []rune(b)
	if len(x) > 64 || len(y) > 64 {
		return max(len(x), len(y)) // no key is that long
	}
	rows := make([][]int, len(x)+1)
	for i := range rows {
		rows[i] = make([]int, len(y)+1)
		rows[i][0] = i
	}
	for j := range rows[0] {
		rows[0][j] = j
	}
	for i := 1; i <= len(x); i++ {
		for j := 1; j <= len(y); j++ {
			cost := 1
			if x[i-1] == y[j-1] {
				cost = 0
			}
			rows[i][j] = min(rows[i-1][j]+1, rows[i][j-1]+1, rows[i-1][j-1]+cost)
			if i > 1 && j > 1 && x[i-1] == y[j-2] && x[i-2] == y[j-1] {
				rows[i][j] = min(rows[i][j], rows[i-2][j-2]+1)
			}
		}
	}
	return rows[len(x)][len(y)]
}

// spelling is a key without the differences that do not make another key: case, blanks and underlines for hyphens.
func spelling(key string) string {
	return strings.ReplaceAll(strings.ReplaceAll(strings.ToLower(strings.TrimSpace(key)), "_", "-"), " ", "-")
}

// oneEditAway is the known key that the written one misspells by one edit or by its case and hyphens, "" if there is
// none. Of several, one of the same length wins, then the first.
func oneEditAway(written string, known []string) string {
	found := ""
	for _, k := range known {
		if spelling(written) != k && edits(written, k) != 1 {
			continue
		}
		if found == "" || len(k) == len(written) && len(found) != len(written) {
			found = k
		}
	}
	return found
}

// Nearest is the known name most like the written one, "" if none is near: a third of its letters may differ, and a
// name that the written one begins or ends with counts as near.
func Nearest(written string, known []string) string {
	best, least := "", len([]rune(written))/3+1
	for _, k := range known {
		if n := edits(spelling(written), k); n < least || n == least && best == "" {
			best, least = k, n
		}
	}
	if best != "" {
		return best
	}
	for _, k := range known {
		if s := spelling(written); len(s) >= 4 && (strings.HasPrefix(k, s) || strings.HasSuffix(k, s) || strings.Contains(s, k) && len(k) >= 4) {
			return k
		}
	}
	return ""
}
