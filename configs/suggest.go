package configs

import (
	"fmt"
	"strings"
)

// nearest returns the candidate closest to what was written, by edit distance and
// without regard to case; "" where none is close enough to be meant.
func nearest(s string, candidates []string) string {
	if len(s) > 40 {
		return ""
	}
	best, bestD := "", max(len(s)/3+1, 2)
	for _, c := range candidates {
		if d := distance(strings.ToLower(s), strings.ToLower(c)); d < bestD {
			best, bestD = c, d
		}
	}
	return best
}

// distance is the edit distance (insertions, deletions, replacements, exchanges of neighbours).
func distance(a, b string) int {
	prev2 := make([]int, len(b)+1)
	prev := make([]int, len(b)+1)
	cur := make([]int, len(b)+1)
	for j := range prev {
		prev[j] = j
	}
	for i := 1; i <= len(a); i++ {
		cur[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			cur[j] = min(prev[j]+1, cur[j-1]+1, prev[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				cur[j] = min(cur[j], prev2[j-2]+1)
			}
		}
		prev2, prev, cur = prev, cur, prev2
	}
	return prev[len(b)]
}

// hint names what an unknown word was probably meant to be; "" where nothing is near.
func hint(s string, known []string) string {
	for _, k := range known {
		if strings.EqualFold(k, s) {
			return fmt.Sprintf("keys and words are in lower case here; write %s", k)
		}
		if strings.ReplaceAll(s, "_", "-") == k {
			return fmt.Sprintf("words are joined by hyphens; write %s", k)
		}
	}
	if c := nearest(s, known); c != "" {
		return fmt.Sprintf("did you mean %s?", c)
	}
	return ""
}

// didYouMean ends a message about an unknown word: the nearest known one, or all.
func didYouMean(s string, known []string) string {
	if h := hint(s, known); h != "" {
		return h
	}
	return "known are " + strings.Join(known, ", ")
}
