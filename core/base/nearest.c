/* Edit distance with exchanges (restricted Damerau-Levenshtein), in three rows on the stack. */
#include "base/nearest.h"

#include <string.h>

enum { LONGEST = 63 };

static char fold_case(char c) { return c >= 'A' && c <= 'Z' ? (char)(c - 'A' + 'a') : c; }

static unsigned least(unsigned a, unsigned b) { return a < b ? a : b; }

static unsigned distance(const char *a, size_t n, const char *b, size_t m) {
    unsigned rows[3][LONGEST + 1];
    for (size_t j = 0; j <= m; j++)
        rows[0][j] = (unsigned)j;
    for (size_t i = 1; i <= n; i++) {
        unsigned *now = rows[i % 3], *before = rows[(i + 2) % 3], *earlier = rows[(i + 1) % 3];
        now[0] = (unsigned)i;
        for (size_t j = 1; j <= m; j++) {
            char x = fold_case(a[i - 1]), y = fold_case(b[j - 1]);
            now[j] = least(before[j - 1] + (x != y), least(before[j], now[j - 1]) + 1);
            if (i > 1 && j > 1 && x == fold_case(b[j - 2]) && fold_case(a[i - 2]) == y)
                now[j] = least(now[j], earlier[j - 2] + 1);
        }
    }
    return rows[n % 3][m];
}

size_t tb_nearest(const char *wanted, size_t n, tb_word_at *word, const void *words) {
    size_t best = n, length = strlen(wanted);
    unsigned fewest = UINT32_MAX;
    for (size_t i = 0; i < n && length <= LONGEST; i++) {
        const char *known = word(words, i);
        size_t m = strlen(known);
        if (m > LONGEST)
            continue;
        unsigned changes = distance(wanted, length, known, m);
        if (changes < fewest && 2 * changes <= (length > m ? length : m)) {
            fewest = changes;
            best = i;
        }
    }
    return best;
}
