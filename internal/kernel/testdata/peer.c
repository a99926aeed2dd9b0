/*
 * The yardstick: the plain loops that a careful user writes in C, compiled on
 * the spot with
 *
 *	gcc -O3 -march=native -ffast-math peer.c -lm
 *
 * It reads lines "case sites steps" from its input, advances a field that has
 * settled in the caches by so many steps, and answers each with the nanoseconds
 * a site and step.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

typedef void step(double *restrict next, const double *restrict now,
		const double *restrict before, long n, double c, double f);

static void phi4(double *restrict next, const double *restrict now,
		const double *restrict before, long n, double c, double f)
{
	for (long i = 1; i < n - 1; i++)
		next[i] = 2 * now[i] - before[i]
			+ c * (now[i + 1] - 2 * now[i] + now[i - 1])
			+ f * (now[i] - now[i] * now[i] * now[i]);
}

static void sinegordon(double *restrict next, const double *restrict now,
		const double *restrict before, long n, double c, double f)
{
	for (long i = 1; i < n - 1; i++)
		next[i] = 2 * now[i] - before[i]
			+ c * (now[i + 1] - 2 * now[i] + now[i - 1])
			- f * sin(now[i]);
}

/* Memory bandwidth, for the record: a[i] = b[i] + s c[i]. */
static void triad(double *restrict a, const double *restrict b,
		const double *restrict c, long n, double s, double unused)
{
	(void)unused;
	for (long i = 0; i < n; i++)
		a[i] = b[i] + s * c[i];
}

static double seconds(void)
{
	struct timespec t;
	clock_gettime(CLOCK_MONOTONIC, &t);
	return t.tv_sec + 1e-9 * t.tv_nsec;
}

int main(void)
{
	char name[32];
	long n, steps, held = 0;
	double *field[3] = {0};

	while (scanf("%31s %ld %ld", name, &n, &steps) == 3) {
		step *f = !strcmp(name, "phi4") ? phi4
			: !strcmp(name, "sinegordon") ? sinegordon
			: !strcmp(name, "triad") ? triad : 0;
		if (!f || n < 3 || steps < 1)
			return 1;
		if (n != held) {
			for (int k = 0; k < 3; k++) {
				free(field[k]);
				field[k] = aligned_alloc(64, (n * sizeof(double) + 63) / 64 * 64);
				if (!field[k])
					return 1;
			}
			held = n;
		}
		for (int k = 0; k < 3; k++)
			for (long i = 0; i < n; i++)
				field[k][i] = tanh(0.02 * (i - n / 2));
		double start = 0;
		for (long s = -1; s < steps; s++) {
			if (s == 0)
				start = seconds();
			f(field[(s + 3) % 3], field[(s + 2) % 3], field[(s + 1) % 3], n, 0.25, 0.0025);
		}
		printf("%.6g\n", 1e9 * (seconds() - start) / ((double)n * steps));
		fflush(stdout);
	}
	return 0;
}
