/**
 * The C around a function `step(in, out)` that makes of it a program which is called in two ways.
 *
 * `respond STIMULUS ROWS RESPONSE` runs the rows of a file once and writes the packed response to
 * another; `time STIMULUS ROWS CYCLES` runs them over and over for a number of cycles, once all of
 * them to warm up, and prints the nanoseconds that the cycles took. Files hold packed rows, 32-bit
 * words in the machine's own order. Exit status 1 for a file that cannot be read or written.
 */
export const mainText = (inputWords: number, outputWords: number): string => `
#define _POSIX_C_SOURCE 199309L
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { IN_WORDS = ${inputWords}, OUT_WORDS = ${outputWords} };

static void run(long cycles, long rows, const unsigned *stimulus, unsigned *response)
{
  long row = 0;
  for (long cycle = 0; cycle < cycles; cycle++) {
    step(stimulus + row * IN_WORDS, response + row * OUT_WORDS);
    /* Each cycle is complete before the next, as for a caller who looks at it. */
    __asm__ volatile("" ::: "memory");
    if (++row == rows) row = 0;
  }
}

static double nanoseconds(void)
{
  struct timespec now;
  clock_gettime(CLOCK_MONOTONIC, &now);
  return 1e9 * (double)now.tv_sec + (double)now.tv_nsec;
}

int main(int argc, char **argv)
{
  if (argc != 5) return 1;
  const long rows = atol(argv[3]);
  const size_t in_words = (size_t)rows * IN_WORDS;
  const size_t out_words = (size_t)rows * OUT_WORDS;
  unsigned *stimulus = malloc(sizeof(unsigned) * (in_words + 1));
  unsigned *response = malloc(sizeof(unsigned) * (out_words + 1));
  FILE *file = fopen(argv[2], "rb");
  if (!stimulus || !response || !file) return 1;
  if (fread(stimulus, sizeof(unsigned), in_words, file) != in_words) return 1;
  fclose(file);
  run(rows, rows, stimulus, response);
  if (strcmp(argv[1], "time") == 0) {
    const long cycles = atol(argv[4]);
    const double start = nanoseconds();
    run(cycles, rows, stimulus, response);
    printf("%.0f\\n", nanoseconds() - start);
    return 0;
  }
  file = fopen(argv[4], "wb");
  if (!file) return 1;
  if (fwrite(response, sizeof(unsigned), out_words, file) != out_words) return 1;
  return fclose(file) != 0;
}
`;
